// Findings for programs, in our own shape: docs/findings.schema.json.
#include <cmath>
#include <nlohmann/json.hpp>

#include "tell/fingerprint.h"
#include "tell/report.h"
#include "tell/words.h"

namespace dextral::tell {

namespace {

using Json = nlohmann::ordered_json;

class Writer {
 public:
  Writer(const FileTable& files, const Style& style) : files_(files), style_(style) {}

  Json finding(const Finding& finding, const std::string& fingerprint) const {
    Json json = place(finding.span);
    json["rule"] = finding.rule;
    json["certainty"] = dextral::text(finding.certainty);
    json["function"] = escaped(finding.function);
    json["sentence"] = escaped(finding.sentence);
    json["sides"] = {escaped(finding.left_says), escaped(finding.right_says)};
    json["left"] = side(finding.left);
    json["right"] = side(finding.right);
    json["repairs"] = Json::array();
    for (const solve::Repair& repair : finding.repairs) json["repairs"].push_back(this->repair(repair));
    if (finding.witness)
      json["witness"] = {{"degrees", std::round(finding.witness->degrees * 1000) / 1000},
                         {"attitude", finding.witness->attitude}};
    json["fingerprint"] = fingerprint;
    return json;
  }

  static Json gone(const std::vector<Known>& entries) {
    Json list = Json::array();
    for (const Known& k : entries)
      list.push_back({{"file", k.file}, {"rule", k.rule}, {"fingerprint", k.fingerprint}, {"sentence", k.sentence}});
    return list;
  }

  Json unread(const std::vector<NotRead>& units) const {
    Json list = Json::array();
    for (const NotRead& unit : units)
      list.push_back({{"file", path(unit.unit)}, {"in part", !unit.lost}, {"why", escaped(unit.why)}});
    return list;
  }

 private:
  std::string path(const std::string& file) const { return escaped(relative(file, style_.root)); }

  Json place(const Span& span) const {
    return {{"file", path(files_.name(span.file))},
            {"line", span.begin.line},
            {"column", span.begin.column},
            {"end line", span.end.line},
            {"end column", span.end.column}};
  }

  Json side(const std::vector<Reason>& reasons) const {
    Json steps = Json::array();
    for (const Reason& reason : reasons) {
      Json step = place(reason.span);
      step["source"] = dextral::text(reason.source);
      step["words"] = words(reason);
      steps.push_back(std::move(step));
    }
    return steps;
  }

  Json repair(const solve::Repair& repair) const {
    Json edits = Json::array();
    for (const solve::Edit& edit : repair.edits) {
      Json json = place(edit.span);
      json["text"] = edit.text;
      edits.push_back(std::move(json));
    }
    return {{"kind", name(repair.kind)},
            {"words", words(repair)},
            {"subject", escaped(repair.subject)},
            {"other", escaped(repair.other)},
            {"edits", edits}};
  }

  const FileTable& files_;
  const Style& style_;
};

}  // namespace

std::string json(const std::vector<Finding>& findings, const FileTable& files, const Summary& summary,
                 const Style& style) {
  const Writer writer(files, style);
  Source source;
  const std::vector<std::string> prints = fingerprints(findings, files, style.root, source);
  Json root{{"version", 1}, {"root", style.root}};
  root["findings"] = Json::array();
  for (std::size_t i = 0; i < findings.size(); ++i) root["findings"].push_back(writer.finding(findings[i], prints[i]));
  root["read"] = summary.read;
  root["not read"] = summary.not_read;
  root["unread"] = writer.unread(summary.unread);
  root["missing headers"] = Json::array();
  for (const std::string& header : summary.missing_headers) root["missing headers"].push_back(escaped(header));
  root["rotations"] = {{"declarations", summary.rotations}, {"known", summary.rotations_known}};
  root["accepted"] = summary.accepted;
  root["known"] = summary.known;
  root["gone"] = Writer::gone(summary.gone);
  root["caution"] = kCaution;
  return root.dump(2, ' ', false, Json::error_handler_t::replace) + "\n";
}

}  // namespace dextral::tell
