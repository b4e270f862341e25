// Findings for people, in the GNU error format, with their evidence below.
#include <cmath>
#include <map>

#include "tell/report.h"
#include "tell/source.h"
#include "tell/words.h"

namespace dextral::tell {

namespace {

constexpr std::size_t kWidest = 100;
constexpr std::size_t kMostGone = 20;

std::string number(std::size_t count, const std::string& one, const std::string& many) {
  return std::to_string(count) + " " + (count == 1 ? one : many);
}

std::string tenths(double value) {
  const long rounded = std::lround(value * 10);
  return std::to_string(rounded / 10) + "." + std::to_string(std::labs(rounded % 10));
}

class Text {
 public:
  Text(const FileTable& files, const Style& style) : files_(files), style_(style) {}

  std::string out;

  void finding(const Finding& finding) {
    const bool error = style_.fail_on && finding.certainty <= *style_.fail_on;
    out += paint(place(finding.span) + ": ", "1") + paint(error ? "error: " : "warning: ", error ? "31" : "35") +
           paint(finding.rule, "1") + " (" + dextral::text(finding.certainty) + "): " + escaped(finding.sentence) +
           "\n";
    quote(finding.span, "    ");
    side(finding.left, finding.left_says);
    side(finding.right, finding.right_says);
    bool first = true;
    for (const solve::Repair& repair : finding.repairs) {
      const std::string sentence = words(repair);
      if (sentence.empty()) continue;
      out += std::string("    ") + (first ? "repair: " : "or: ") + sentence + "\n";
      first = false;
    }
    if (finding.witness)
      out += "    off by " + tenths(finding.witness->degrees) + " deg " + escaped(finding.witness->attitude) + "\n";
  }

  void summary(const std::vector<Finding>& findings, const Summary& summary) {
    reading(summary);
    out += number(findings.size(), "finding", "findings");
    if (summary.accepted) out += ", " + std::to_string(summary.accepted) + " accepted";
    if (summary.known) out += ", " + std::to_string(summary.known) + " known";
    out += "\n";
    std::map<std::pair<std::string, Certainty>, int> counts;
    for (const Finding& finding : findings) ++counts[{finding.rule, finding.certainty}];
    for (const auto& [key, count] : counts)
      out += "    " + std::to_string(count) + " " + key.first + " (" + dextral::text(key.second) + ")\n";
    gone(summary.gone);
    if (summary.rotations)
      out += "frames known for " + std::to_string(summary.rotations_known) + " of " +
             number(summary.rotations, "declaration that carries a rotation", "declarations that carry a rotation") +
             "\n";
    out += std::string(kCaution) + "\n";
  }

 private:
  std::string paint(const std::string& text, const char* color) const {
    return style_.color ? "\x1b[" + std::string(color) + "m" + text + "\x1b[0m" : text;
  }

  std::string path(const std::string& file) const { return escaped(relative(file, style_.root)); }

  std::string place(const Span& span) const {
    if (!span.valid()) return span.file == FileId::none ? "dextral" : path(files_.name(span.file));
    return path(files_.name(span.file)) + ":" + std::to_string(span.begin.line) + ":" +
           std::to_string(std::max(span.begin.column, 1u));
  }

  void quote(const Span& span, const std::string& indent) {
    const auto quoted = source_.quote(files_.name(span.file), span, kWidest);
    if (!quoted) return;
    out += indent + quoted->text + "\n" + indent + std::string(quoted->column, ' ') +
           paint(std::string(quoted->width, '~'), "32") + "\n";
  }

  void side(const std::vector<Reason>& reasons, const std::string& says) {
    if (reasons.empty()) return;
    out += "    " + (says.empty() ? "one side" : escaped(says)) + ", because\n";
    for (const Reason& reason : reasons) {
      out += "      " + place(reason.span) + ": " + words(reason) + "\n";
      quote(reason.span, "        ");
    }
  }

  void reading(const Summary& summary) {
    out += number(summary.read, "file", "files") + " read";
    if (summary.not_read) out += ", " + std::to_string(summary.not_read) + " not read in whole";
    out += "\n";
    for (const NotRead& unit : summary.unread)
      out += "    " + path(unit.unit) + (unit.lost ? ": not read: " : ": read in part: ") + escaped(unit.why) + "\n";
    for (const std::string& header : summary.missing_headers)
      out += "    header not found: " + escaped(header) + "; what needs it was not read\n";
  }

  void gone(const std::vector<Known>& entries) {
    if (entries.empty()) return;
    out += number(entries.size(), "known finding is", "known findings are") + " gone; --update-known takes them out\n";
    for (std::size_t i = 0; i < entries.size() && i < kMostGone; ++i)
      out += "    " + escaped(entries[i].file) + ": " + escaped(entries[i].rule) + ": " + escaped(entries[i].sentence) +
             "\n";
    if (entries.size() > kMostGone) out += "    and " + std::to_string(entries.size() - kMostGone) + " more\n";
  }

  const FileTable& files_;
  const Style& style_;
  Source source_;
};

}  // namespace

std::string text(const std::vector<Finding>& findings, const FileTable& files, const Summary& summary,
                 const Style& style) {
  Text text(files, style);
  for (const Finding& finding : findings) text.finding(finding);
  text.summary(findings, summary);
  return text.out;
}

}  // namespace dextral::tell
