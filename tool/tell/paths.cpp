#include "tell/paths.h"

namespace dextral::tell {

std::string relative(const std::string& path, const std::string& root) {
  if (root == "/" && path.size() > 1 && path[0] == '/') return path.substr(1);
  if (!root.empty() && path.rfind(root + "/", 0) == 0) return path.substr(root.size() + 1);
  return path;
}

std::string percent_encoded(const std::string& path) {
  static const std::string kept = "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789-._~/";
  std::string uri;
  for (char c : path) {
    const unsigned char byte = static_cast<unsigned char>(c);
    if (kept.find(c) != std::string::npos)
      uri += c;
    else
      uri += {'%', "0123456789ABCDEF"[byte >> 4], "0123456789ABCDEF"[byte & 15]};
  }
  return uri;
}

std::string file_uri(const std::string& path) { return "file://" + percent_encoded(path); }

}  // namespace dextral::tell
