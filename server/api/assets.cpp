#include "server/api/assets.h"

#include <array>
#include <span>
#include <utility>

namespace hearthfront::server {

// Written by the build from web/dist and openapi.yaml (server/embed.cmake).
std::span<const Asset> embedded_assets();

const Asset* find_asset(std::string_view path) {
  for (const Asset& asset : embedded_assets())
    if (asset.path == path) return &asset;
  return nullptr;
}

std::string content_type_of(std::string_view path) {
  constexpr std::array<std::pair<std::string_view, std::string_view>, 8> types{
      {{".html", "text/html; charset=utf-8"},
       {".js", "text/javascript; charset=utf-8"},
       {".css", "text/css; charset=utf-8"},
       {".svg", "image/svg+xml"},
       {".png", "image/png"},
       {".ico", "image/x-icon"},
       {".webmanifest", "application/manifest+json"},
       {".yaml", "application/yaml"}}};
  for (const auto& [ending, type] : types)
    if (path.ends_with(ending)) return std::string(type);
  return "application/octet-stream";
}

}  // namespace hearthfront::server
