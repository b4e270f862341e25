#include "tell/ledger.h"

#include <algorithm>
#include <nlohmann/json.hpp>
#include <set>
#include <tuple>

#include "tell/fingerprint.h"
#include "tell/paths.h"

namespace dextral::tell {

namespace {

using Json = nlohmann::ordered_json;

constexpr int kVersion = 1;
constexpr const char* kRemedy = "; `dextral lint --update-known FILE` writes a new one";

// Takes everything and remembers where the first fault stands.
struct FaultFinder : nlohmann::json_sax<Json> {
  std::size_t position = 0;
  bool null() override { return true; }
  bool boolean(bool) override { return true; }
  bool number_integer(number_integer_t) override { return true; }
  bool number_unsigned(number_unsigned_t) override { return true; }
  bool number_float(number_float_t, const string_t&) override { return true; }
  bool string(string_t&) override { return true; }
  bool binary(binary_t&) override { return true; }
  bool start_object(std::size_t) override { return true; }
  bool key(string_t&) override { return true; }
  bool end_object() override { return true; }
  bool start_array(std::size_t) override { return true; }
  bool end_array() override { return true; }
  bool parse_error(std::size_t at, const std::string&, const nlohmann::detail::exception&) override {
    position = at;
    return false;
  }
};

LedgerProblem syntax_problem(const std::string& text, std::size_t position) {
  const std::size_t at = std::min(position ? position - 1 : 0, text.size());
  const auto line = std::size_t(std::count(text.begin(), text.begin() + std::ptrdiff_t(at), '\n')) + 1;
  const std::size_t start = at ? text.rfind('\n', at - 1) : std::string::npos;
  return {line, at - (start == std::string::npos ? 0 : start + 1) + 1, std::string("this is no JSON") + kRemedy};
}

std::optional<Known> entry(const Json& json) {
  Known known;
  for (auto [key, value] : {std::pair{"fingerprint", &known.fingerprint},
                            {"rule", &known.rule},
                            {"file", &known.file},
                            {"sentence", &known.sentence}}) {
    if (!json.is_object() || !json.contains(key) || !json[key].is_string()) return std::nullopt;
    *value = json[key].get<std::string>();
  }
  return known;
}

auto identity(const Known& known) { return std::tie(known.file, known.rule, known.fingerprint); }

bool before(const Known& a, const Known& b) {
  return std::tie(a.file, a.rule, a.fingerprint, a.sentence) < std::tie(b.file, b.rule, b.fingerprint, b.sentence);
}

}  // namespace

std::variant<std::vector<Known>, LedgerProblem> read_ledger(const std::string& text) {
  FaultFinder faults;
  if (!Json::sax_parse(text, &faults)) return syntax_problem(text, faults.position);
  const Json json = Json::parse(text, nullptr, false);
  if (!json.is_object() || !json.contains("known findings") || !json["known findings"].is_array())
    return LedgerProblem{0, 0, std::string("this is no ledger of known findings") + kRemedy};
  if (!json.contains("version") || json["version"] != kVersion)
    return LedgerProblem{0, 0, std::string("this ledger is of another version of dextral") + kRemedy};
  std::vector<Known> list;
  for (const Json& item : json["known findings"]) {
    auto known = entry(item);
    if (!known) {
      const std::string number = std::to_string(list.size() + 1);
      return LedgerProblem{0, 0, "entry " + number + " lacks a fingerprint, rule, file or sentence" + kRemedy};
    }
    list.push_back(std::move(*known));
  }
  return list;
}

std::string write_ledger(std::vector<Known> known) {
  std::sort(known.begin(), known.end(), before);
  known.erase(std::unique(known.begin(), known.end()), known.end());
  std::string text = "{\n  \"version\": " + std::to_string(kVersion) + ",\n  \"known findings\": [";
  const auto replace = Json::error_handler_t::replace;
  for (std::size_t i = 0; i < known.size(); ++i) {
    const Known& k = known[i];
    const Json item{{"file", k.file}, {"rule", k.rule}, {"fingerprint", k.fingerprint}, {"sentence", k.sentence}};
    text += std::string(i ? "," : "") + "\n    " + item.dump(-1, ' ', false, replace);
  }
  return text + (known.empty() ? "]\n}\n" : "\n  ]\n}\n");
}

std::vector<Known> entries(const std::vector<Finding>& findings, const FileTable& files, const std::string& root) {
  Source source;
  const std::vector<std::string> prints = fingerprints(findings, files, root, source);
  std::vector<Known> list;
  for (std::size_t i = 0; i < findings.size(); ++i)
    list.push_back({prints[i], findings[i].rule, escaped(relative(files.name(findings[i].span.file), root)),
                    escaped(findings[i].sentence)});
  return list;
}

SetAside set_aside(std::vector<Finding> findings, const std::vector<Known>& ledger, const FileTable& files,
                   const std::string& root, const LookedAt& looked_at) {
  auto less = [](const Known& a, const Known& b) { return identity(a) < identity(b); };
  const std::set<Known, decltype(less)> known(ledger.begin(), ledger.end(), less);
  std::set<Known, decltype(less)> met(less);
  const std::vector<Known> now = entries(findings, files, root);
  SetAside result;
  for (std::size_t i = 0; i < findings.size(); ++i) {
    if (known.contains(now[i])) {
      met.insert(now[i]);
      ++result.known;
    } else {
      result.fresh.push_back(std::move(findings[i]));
    }
  }
  for (const Known& entry : known)
    if (!met.contains(entry) && looked_at(entry.file)) result.gone.push_back(entry);
  return result;
}

std::vector<Known> updated(const std::vector<Known>& before, const std::vector<Finding>& findings,
                           const FileTable& files, const std::string& root, const LookedAt& looked_at) {
  std::vector<Known> list = entries(findings, files, root);
  for (const Known& entry : before)
    if (!looked_at(entry.file)) list.push_back(entry);
  return list;
}

}  // namespace dextral::tell
