"""A real SMTP server for the tests: STARTTLS before anything else, sign-in, and behaviour by a mode file.

Arguments: port, certificate, key, mode file. Writes one JSON line for each mail to stdout. The mode file holds one
word, read for each mail: ok, refuse (550 for each recipient), partial (550 for the second one), later (451), or
slow (takes the mail, then answers after 30 s).
"""
import asyncio
import json
import ssl
import sys

from aiosmtpd.controller import Controller
from aiosmtpd.smtp import AuthResult

PORT, CERTIFICATE, KEY, MODE_FILE = int(sys.argv[1]), sys.argv[2], sys.argv[3], sys.argv[4]


def mode():
    with open(MODE_FILE, encoding="ascii") as file:
        return file.read().strip()


def tell(value):
    print(json.dumps(value), flush=True)


class Handler:
    async def handle_RCPT(self, server, session, envelope, address, options):
        if mode() == "refuse" or (mode() == "partial" and envelope.rcpt_tos):
            return "550 5.1.1 no such mailbox"
        if mode() == "later":
            return "451 4.3.0 try again later"
        envelope.rcpt_tos.append(address)
        return "250 OK"

    async def handle_DATA(self, server, session, envelope):
        tell({"from": envelope.mail_from, "to": envelope.rcpt_tos, "tls": session.ssl is not None,
              "user": session.auth_data, "text": envelope.content.decode("ascii")})
        if mode() == "slow":
            await asyncio.sleep(30)
        return "250 OK"


def authenticate(server, session, envelope, mechanism, data):
    good = data.login == b"furnaces" and data.password == b"a password for mail"
    return AuthResult(success=good, handled=False, auth_data=data.login.decode("ascii"))


context = ssl.create_default_context(ssl.Purpose.CLIENT_AUTH)
context.load_cert_chain(CERTIFICATE, KEY)
controller = Controller(Handler(), hostname="127.0.0.1", port=PORT, tls_context=context, require_starttls=True,
                        auth_required=True, authenticator=authenticate)
controller.start()
tell({"ready": True})
sys.stdin.read()
controller.stop()
