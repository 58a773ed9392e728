// FileText (csv_text.h): bytes to UTF-8 by the C library's iconv.
#include <iconv.h>

#include <algorithm>
#include <array>
#include <cerrno>
#include <cstdio>
#include <stdexcept>

#include "server/base/utf8.h"
#include "server/ingest/csv_text.h"

namespace hearthfront::server {
namespace {

constexpr std::string_view utf8_mark = "\xef\xbb\xbf", little_mark = "\xff\xfe", big_mark = "\xfe\xff";

// A fault at the end of the text read so far.
FileFault fault_after(std::string_view before, const std::string& what) {
  const int line = count_lines(before);
  return {line, "Line " + std::to_string(line) + ": " + what};
}

std::string hex(char byte) {
  char text[8];
  std::snprintf(text, sizeof text, "0x%02X", static_cast<unsigned>(static_cast<unsigned char>(byte)));
  return text;
}

class Converter {
 public:
  explicit Converter(const char* from) : handle_(iconv_open("UTF-8", from)) {
    // glibc converts these by itself or from its packaged modules.
    if (handle_ ==
        reinterpret_cast<iconv_t>(-1))  // NOLINT(performance-no-int-to-ptr): iconv's own error value
      throw std::runtime_error(std::string("the C library cannot convert from ") + from);
  }
  ~Converter() { iconv_close(handle_); }
  Converter(const Converter&) = delete;
  Converter& operator=(const Converter&) = delete;

  // Appends to `into`. False where a byte sequence has no meaning; `rest` then begins with it.
  bool run(std::string_view& rest, std::string& into) {
    std::array<char, 65'536> buffer{};
    std::string copy;  // iconv wants to write through its pointer type, though not to the bytes
    while (!rest.empty()) {
      copy.assign(rest.substr(0, buffer.size() / 4));
      char* in = copy.data();
      std::size_t in_left = copy.size();
      char* out = buffer.data();
      std::size_t out_left = buffer.size();
      const std::size_t result = iconv(handle_, &in, &in_left, &out, &out_left);
      const int error = errno;
      into.append(buffer.data(), buffer.size() - out_left);
      const std::size_t done = copy.size() - in_left;
      rest.remove_prefix(done);
      // EINVAL: a character cut at the end of the piece; more of it follows unless the file ends here.
      if (result == static_cast<std::size_t>(-1) && (error == EILSEQ || done == 0)) return false;
    }
    return true;
  }

 private:
  iconv_t handle_;
};

}  // namespace

FileText::FileText(std::string_view bytes, Encoding wanted) : text(bytes), encoding(wanted) {
  const bool utf16 =
      wanted == Encoding::utf16 || wanted == Encoding::utf16_le || wanted == Encoding::utf16_be;
  const bool little = bytes.starts_with(little_mark), big = bytes.starts_with(big_mark);
  const auto says = [&] {
    return std::string("the mapping says encoding = \"") + std::string(server::text(wanted)) + "\".";
  };
  if ((little || big) && !utf16 && wanted != Encoding::automatic) {
    fault = {1, "Line 1: the file begins with the byte order mark of UTF-16, " + says()};
  } else if ((little && wanted == Encoding::utf16_be) || (big && wanted == Encoding::utf16_le)) {
    fault = {1, std::string("Line 1: the file begins with the byte order mark of UTF-16 ") +
                    (little ? "LE, " : "BE, ") + says()};
  } else if (wanted == Encoding::utf16 && !little && !big) {
    fault = {1, "Line 1: the file does not begin with a byte order mark, " + says() +
                    " Without one say utf-16-le or utf-16-be, or the encoding is another one."};
  } else if (little || wanted == Encoding::utf16_le) {
    encoding = Encoding::utf16_le;
    convert(bytes.substr(little ? 2 : 0), "UTF-16LE");
  } else if (big || wanted == Encoding::utf16_be) {
    encoding = Encoding::utf16_be;
    convert(bytes.substr(big ? 2 : 0), "UTF-16BE");
  } else if (wanted == Encoding::windows_1252) {
    convert(bytes, "CP1252");
  } else if (wanted == Encoding::iso_8859_1) {
    convert(bytes, "ISO-8859-1");
    // C1 control characters stand in no logger file; Windows-1252 has letters and signs there.
    const auto odd = std::find_if(bytes.begin(), bytes.end(), [](char c) {
      const auto byte = static_cast<unsigned char>(c);
      return byte >= 0x80 && byte < 0xa0;
    });
    if (odd != bytes.end())
      fault = fault_after(
          bytes.substr(0, static_cast<std::size_t>(odd - bytes.begin())),
          "the byte " + hex(*odd) + " is a control character in ISO-8859-1: is the file windows-1252?");
  } else {
    if (bytes.starts_with(utf8_mark)) {
      text.remove_prefix(utf8_mark.size());
      encoding = Encoding::utf8;
    }
    std::string_view rest = text;
    while (wanted == Encoding::utf8 && !rest.empty()) {
      const std::size_t length = utf8_length(rest);
      if (length == 0) break;
      rest.remove_prefix(length);
    }
    if (wanted == Encoding::utf8 && !rest.empty())
      fault = fault_after(
          text.substr(0, text.size() - rest.size()),
          "the byte " + hex(rest.front()) + " is not UTF-8, " + says() + " Is the file windows-1252?");
  }
  if (fault) return;
  if (const std::size_t at = text.find('\0'); at != std::string_view::npos)
    fault =
        fault_after(text.substr(0, at),
                    "a zero byte: the file is UTF-16 without byte order mark (say utf-16-le or utf-16-be), "
                    "or not a text at all.");
  else if (text.find_first_not_of(" \t\r\n") == std::string_view::npos)
    fault = {0, "The file is empty."};
}

void FileText::convert(std::string_view bytes, const char* from) {
  converted_.reserve(bytes.size() + bytes.size() / 8);
  std::string_view rest = bytes;
  if (!Converter(from).run(rest, converted_))
    fault = fault_after(converted_, "the byte " + hex(rest.front()) + " has no meaning in " + from +
                                        " here: the file is cut, damaged, or in another encoding.");
  text = converted_;
}

}  // namespace hearthfront::server
