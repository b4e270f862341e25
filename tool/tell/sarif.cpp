// Findings in SARIF 2.1.0.
//
// Each result carries the chain of evidence twice: as related locations for
// viewers that list places, and as one code flow that runs from the first fact
// over the place of the finding to the fact that contradicts it. Columns are
// UTF-16 code units. Paths below the root are relative to the base SRCROOT.
// In messages, braces are doubled and a bracket before a parenthesis gets a
// backslash, since they would else be placeholders and links (OASIS SARIF
// 2.1.0, 3.11.5 and 3.11.6: from memory).
#include <cmath>
#include <map>
#include <nlohmann/json.hpp>

#include "tell/fingerprint.h"
#include "tell/report.h"
#include "tell/words.h"

namespace dextral::tell {

namespace {

using Json = nlohmann::ordered_json;

constexpr const char* kSchema = "https://json.schemastore.org/sarif-2.1.0.json";
constexpr const char* kBase = "SRCROOT";
constexpr const char* kFingerprint = "dextral/v1";

std::string message_text(const std::string& words) {
  std::string text;
  for (std::size_t i = 0; i < words.size(); ++i) {
    const char c = words[i];
    if (c == '{' || c == '}') text += c;
    if (c == ']' && i + 1 < words.size() && words[i + 1] == '(') text += '\\';
    text += c;
  }
  return text;
}

Json message(const std::string& words) { return {{"text", message_text(words)}}; }

class Writer {
 public:
  Writer(const FileTable& files, const Style& style) : files_(files), style_(style) {}

  Json driver() const {
    Json driver{{"name", "dextral"}};
    if (!style_.version.empty()) driver["version"] = style_.version;
    driver["rules"] = Json::array();
    for (const Rule& rule : rules()) driver["rules"].push_back(descriptor(rule));
    return driver;
  }

  Json result(const Finding& finding, const std::string& fingerprint) {
    Json result{{"ruleId", finding.rule}};
    if (auto index = rule_index(finding.rule)) result["ruleIndex"] = *index;
    result["level"] = level(finding.certainty);
    result["message"] = message(escaped(finding.sentence));
    result["locations"] = Json::array();
    if (finding.span.valid()) result["locations"].push_back(place_of(finding));
    add_evidence(result, finding);
    add_fixes(result, finding);
    result["partialFingerprints"] = {{kFingerprint, fingerprint}};
    result["properties"] = properties(finding);
    return result;
  }

  Json invocation(const Summary& summary) const {
    bool lost = false;
    Json notes = Json::array();
    for (const NotRead& unit : summary.unread) {
      lost |= unit.lost;
      Json note{{"level", unit.lost ? "error" : "warning"},
                {"message", message((unit.lost ? "not read: " : "read in part: ") + escaped(unit.why))}};
      note["locations"] = Json::array({{{"physicalLocation", {{"artifactLocation", artifact(unit.unit)}}}}});
      notes.push_back(std::move(note));
    }
    for (const std::string& header : summary.missing_headers)
      notes.push_back({{"level", "warning"}, {"message", message("header not found: " + escaped(header))}});
    for (const Known& known : summary.gone)
      notes.push_back({{"level", "note"},
                       {"message", message("known finding is gone: " + escaped(known.file) + ": " +
                                           escaped(known.rule) + ": " + escaped(known.sentence))}});
    return {{"executionSuccessful", !lost}, {"toolExecutionNotifications", notes}};
  }

 private:
  static std::optional<std::size_t> rule_index(const std::string& id) {
    for (std::size_t i = 0; i < rules().size(); ++i)
      if (rules()[i].id == id) return i;
    return std::nullopt;
  }

  Json descriptor(const Rule& rule) const {
    Json json{{"id", rule.id}, {"shortDescription", {{"text", rule.summary}}}};
    json["help"] = {{"text", "`dextral rules " + rule.id + "` shows the page of this rule."}};
    if (!style_.pages.empty()) json["helpUri"] = style_.pages + "/" + rule.id + ".md";
    json["defaultConfiguration"] = {{"level", "warning"}};
    return json;
  }

  const char* level(Certainty certainty) const {
    if (style_.fail_on && certainty <= *style_.fail_on) return "error";
    return certainty == Certainty::suspect ? "note" : "warning";
  }

  Json artifact(const std::string& file) const {
    const std::string path = relative(file, style_.root);
    if (path.empty() || path[0] == '/') return {{"uri", file_uri(path)}};
    return {{"uri", percent_encoded(path)}, {"uriBaseId", kBase}};
  }

  // SARIF ends a region at the column behind it, as spans do.
  Json region(const Span& span) {
    const std::string& file = files_.name(span.file);
    Json region{{"startLine", span.begin.line}, {"startColumn", source_.utf16_column(file, span.begin)}};
    if (span.end >= span.begin) {
      region["endLine"] = span.end.line;
      region["endColumn"] = source_.utf16_column(file, span.end);
    }
    return region;
  }

  Json physical(const Span& span) {
    return {{"artifactLocation", artifact(files_.name(span.file))}, {"region", region(span)}};
  }

  Json place_of(const Finding& finding) {
    Json place{{"physicalLocation", physical(finding.span)}};
    if (!finding.function.empty())
      place["logicalLocations"] =
          Json::array({{{"fullyQualifiedName", escaped(finding.function)}, {"kind", "function"}}});
    return place;
  }

  void add_evidence(Json& result, const Finding& finding) {
    Json related = Json::array(), steps = Json::array();
    auto add = [&](const Reason& reason) {
      if (!reason.span.valid()) return;
      Json place{{"physicalLocation", physical(reason.span)}, {"message", message(words(reason))}};
      steps.push_back({{"location", place}});
      place["id"] = related.size() + 1;
      related.push_back(std::move(place));
    };
    for (auto reason = finding.left.rbegin(); reason != finding.left.rend(); ++reason) add(*reason);
    if (finding.span.valid()) {
      Json place = place_of(finding);
      place["message"] = message(escaped(finding.sentence));
      steps.push_back({{"location", std::move(place)}, {"importance", "essential"}});
    }
    for (const Reason& reason : finding.right) add(reason);
    if (related.empty()) return;
    result["relatedLocations"] = std::move(related);
    const Json flow{{"threadFlows", Json::array({{{"locations", std::move(steps)}}})}};
    result["codeFlows"] = Json::array({flow});
  }

  void add_fixes(Json& result, const Finding& finding) {
    Json fixes = Json::array();
    for (const solve::Repair& repair : finding.repairs) {
      Json changes = artifact_changes(repair);
      if (changes.empty()) continue;
      fixes.push_back({{"description", message(words(repair))}, {"artifactChanges", std::move(changes)}});
    }
    if (!fixes.empty()) result["fixes"] = std::move(fixes);
  }

  // One change a file. Empty where an edit cannot be said in JSON.
  Json artifact_changes(const solve::Repair& repair) {
    std::map<std::string, Json> by_file;
    for (const solve::Edit& edit : repair.edits) {
      if (!edit.span.valid() || !is_utf8(edit.text)) return Json::array();
      Json& list = by_file.try_emplace(files_.name(edit.span.file), Json::array()).first->second;
      list.push_back({{"deletedRegion", region(edit.span)}, {"insertedContent", {{"text", edit.text}}}});
    }
    Json changes = Json::array();
    for (auto& [file, replacements] : by_file)
      changes.push_back({{"artifactLocation", artifact(file)}, {"replacements", std::move(replacements)}});
    return changes;
  }

  static Json properties(const Finding& finding) {
    Json bag{{"certainty", dextral::text(finding.certainty)}};
    if (!finding.left_says.empty() || !finding.right_says.empty())
      bag["sides"] = {escaped(finding.left_says), escaped(finding.right_says)};
    if (finding.witness)
      bag["witness"] = {{"degrees", std::round(finding.witness->degrees * 1000) / 1000},
                        {"attitude", finding.witness->attitude}};
    return bag;
  }

  const FileTable& files_;
  const Style& style_;
  Source source_;
};

}  // namespace

std::string sarif(const std::vector<Finding>& findings, const FileTable& files, const Summary& summary,
                  const Style& style) {
  Writer writer(files, style);
  Source source;
  const std::vector<std::string> prints = fingerprints(findings, files, style.root, source);
  Json run{{"tool", {{"driver", writer.driver()}}}};
  run["invocations"] = Json::array({writer.invocation(summary)});
  const bool at_top = style.root.empty() || style.root.back() == '/';
  run["originalUriBaseIds"] = {{kBase, {{"uri", file_uri(at_top ? "/" : style.root + "/")}}}};
  run["columnKind"] = "utf16CodeUnits";
  run["results"] = Json::array();
  for (std::size_t i = 0; i < findings.size(); ++i) run["results"].push_back(writer.result(findings[i], prints[i]));
  run["properties"] = {{"filesRead", summary.read},
                       {"filesNotRead", summary.not_read},
                       {"accepted", summary.accepted},
                       {"known", summary.known},
                       {"rotationDeclarations", summary.rotations},
                       {"rotationDeclarationsKnown", summary.rotations_known},
                       {"caution", kCaution}};
  const Json root{{"$schema", kSchema}, {"version", "2.1.0"}, {"runs", Json::array({std::move(run)})}};
  return root.dump(2, ' ', false, Json::error_handler_t::replace) + "\n";
}

}  // namespace dextral::tell
