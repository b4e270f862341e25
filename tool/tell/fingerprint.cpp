#include "tell/fingerprint.h"

#include <cstdint>
#include <map>

#include "tell/paths.h"

namespace dextral::tell {

namespace {

std::string trimmed(const std::string& line) {
  const std::size_t first = line.find_first_not_of(" \t");
  if (first == std::string::npos) return "";
  return line.substr(first, line.find_last_not_of(" \t") - first + 1);
}

// FNV-1a, 64 bit, as 16 hexadecimal digits.
std::string hash(const std::string& text) {
  std::uint64_t value = 14695981039346656037ull;
  for (char c : text) value = (value ^ static_cast<unsigned char>(c)) * 1099511628211ull;
  std::string digits;
  for (int shift = 60; shift >= 0; shift -= 4) digits += "0123456789abcdef"[(value >> shift) & 15];
  return digits;
}

}  // namespace

std::vector<std::string> fingerprints(const std::vector<Finding>& findings, const FileTable& files,
                                      const std::string& root, Source& source) {
  std::map<std::string, int> told;
  std::vector<std::string> list;
  for (const Finding& finding : findings) {
    const std::string& file = files.name(finding.span.file);
    std::string key;
    for (const std::string& part :
         {finding.rule, relative(file, root), finding.function, trimmed(source.line(file, finding.span.begin.line))})
      key += part + '\0';
    list.push_back(hash(key + std::to_string(told[key]++)));
  }
  return list;
}

}  // namespace dextral::tell
