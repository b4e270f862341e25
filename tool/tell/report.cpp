#include "tell/report.h"

#include <algorithm>
#include <cmath>
#include <fstream>
#include <map>
#include <nlohmann/json.hpp>

namespace dextral::tell {

namespace {

constexpr std::size_t kWidest = 110;

// Control characters and broken UTF-8 are not passed on.
std::string clean(const std::string& text) {
  std::string out;
  for (std::size_t i = 0; i < text.size(); ++i) {
    unsigned char c = static_cast<unsigned char>(text[i]);
    std::size_t length = c < 0x80 ? 1 : c >= 0xf0 && c < 0xf5 ? 4 : c >= 0xe0 ? 3 : c >= 0xc2 ? 2 : 0;
    bool whole = length > 0 && c < 0xf5 && i + length <= text.size();
    for (std::size_t k = 1; whole && k < length; ++k) whole = (static_cast<unsigned char>(text[i + k]) & 0xc0) == 0x80;
    if (c == '\t') out += ' ';
    else if (!whole || c < 0x20 || c == 0x7f) out += "?";
    else out += text.substr(i, length);
    if (whole) i += length - 1;
  }
  return out;
}

class Lines {
 public:
  const std::string& line(const std::string& file, std::uint32_t number) {
    static const std::string none;
    auto [found, fresh] = files_.try_emplace(file);
    if (fresh) {
      std::ifstream in(file, std::ios::binary);
      for (std::string line; std::getline(in, line);) {
        if (!line.empty() && line.back() == '\r') line.pop_back();
        found->second.push_back(line);
      }
    }
    return number && number <= found->second.size() ? found->second[number - 1] : none;
  }

 private:
  std::map<std::string, std::vector<std::string>> files_;
};

std::string words(const Reason& reason) {
  std::string subject = "`" + clean(reason.subject) + "`", object = "`" + clean(reason.object) + "`";
  switch (reason.kind) {
    case ReasonKind::declared: return subject + " is declared " + object;
    case ReasonKind::named: return subject + " reads as " + object + " by its name";
    case ReasonKind::operation: return subject + " is a " + clean(reason.object);
    case ReasonKind::assigned: return subject + " is assigned to " + object;
    case ReasonKind::passed: return subject + " is passed as " + object;
    case ReasonKind::returned: return subject + " is returned from " + object;
    case ReasonKind::called: return subject + " calls " + object;
    case ReasonKind::read: return subject + " is read from " + object;
  }
  return subject;
}

class Text {
 public:
  Text(const FileTable& files, const Style& style) : files_(files), style_(style) {}

  std::string out;

  void finding(const Finding& finding) {
    bool error = style_.fail_on && finding.certainty <= *style_.fail_on;
    out += paint(place(finding.span) + ": ", "1") + paint(error ? "error: " : "warning: ", error ? "31" : "35") +
           paint(finding.rule, "1") + " (" + dextral::text(finding.certainty) + "): " + clean(finding.sentence) + "\n";
    quote(finding.span, "    ");
    side(finding.left, finding.left_frame);
    side(finding.right, finding.right_frame);
    repairs(finding);
    if (finding.witness) out += "    off by " + rounded(finding.witness->degrees) + " deg " + finding.witness->attitude + "\n";
  }

  void summary(const std::vector<Finding>& findings, const Summary& summary) {
    out += std::to_string(summary.read) + (summary.read == 1 ? " file read" : " files read");
    if (summary.not_read) out += ", " + std::to_string(summary.not_read) + " not read";
    out += "; " + std::to_string(findings.size()) + (findings.size() == 1 ? " finding" : " findings");
    if (summary.accepted) out += ", " + std::to_string(summary.accepted) + " accepted";
    out += "\n";
    std::map<std::pair<std::string, Certainty>, int> counts;
    for (const Finding& finding : findings) ++counts[{finding.rule, finding.certainty}];
    for (const auto& [key, count] : counts)
      out += "    " + std::to_string(count) + " " + key.first + " (" + dextral::text(key.second) + ")\n";
    if (summary.rotations)
      out += "frames known for " + std::to_string(summary.rotations_known) + " of " + std::to_string(summary.rotations) + " declarations that carry a rotation\n";
    for (const std::string& header : summary.missing_headers) out += "header not found: " + clean(header) + "; what needs it was not read\n";
    out += "An aid, not a proof: certification rules and the responsible engineers decide.\n";
  }

 private:
  std::string paint(const std::string& text, const char* color) const {
    return style_.color ? "\x1b[" + std::string(color) + "m" + text + "\x1b[0m" : text;
  }
  static std::string rounded(double value) {
    std::string text = std::to_string(std::round(value * 10) / 10);
    return text.substr(0, text.find('.') + 2);
  }
  std::string place(const Span& span) const {
    return clean(relative(files_.name(span.file), style_.root)) + ":" + std::to_string(span.begin.line) + ":" + std::to_string(span.begin.column);
  }

  // The line of source with a marker under the span.
  void quote(const Span& span, const std::string& indent) {
    if (!span.valid()) return;
    const std::string& line = lines_.line(files_.name(span.file), span.begin.line);
    if (line.empty()) return;
    std::size_t begin = std::min<std::size_t>(span.begin.column ? span.begin.column - 1 : 0, line.size());
    std::size_t end = span.end.line == span.begin.line ? std::min<std::size_t>(span.end.column - 1, line.size()) : line.size();
    std::size_t first = line.find_first_not_of(" \t");
    std::size_t from = std::min(first == std::string::npos ? 0 : first, begin);
    if (begin - from > kWidest / 2) from = begin - kWidest / 4;
    std::string shown = line.substr(from, kWidest);
    std::size_t width = std::max<std::size_t>(1, std::min(end, from + shown.size()) - begin);
    out += indent + clean(shown) + "\n" + indent + std::string(columns(line, from, begin), ' ') + paint(std::string(std::max<std::size_t>(1, columns(line, begin, begin + width)), '~'), "32") + "\n";
  }

  static std::size_t columns(const std::string& line, std::size_t from, std::size_t to) {
    std::size_t count = 0;
    for (std::size_t i = from; i < to && i < line.size(); ++i) count += (static_cast<unsigned char>(line[i]) & 0xc0) != 0x80;
    return count;
  }

  void side(const std::vector<Reason>& reasons, const Frame& frame) {
    if (reasons.empty()) return;
    out += "    " + (frame.known() ? dextral::text(frame) : std::string("one side")) + ", because\n";
    for (const Reason& reason : reasons) {
      out += "      " + place(reason.span) + ": " + words(reason) + "\n";
      quote(reason.span, "        ");
    }
  }

  void repairs(const Finding& finding) {
    for (std::size_t i = 0; i < finding.repairs.size(); ++i) {
      std::string sentence = repair(finding.repairs[i]);
      if (!sentence.empty()) out += std::string("    ") + (i ? "or: " : "repair: ") + sentence + "\n";
    }
  }

  static std::string repair(const solve::Repair& repair) {
    std::string subject = "`" + clean(repair.subject) + "`", other = "`" + clean(repair.other) + "`";
    switch (repair.kind) {
      case solve::RepairKind::none: return "";
      case solve::RepairKind::transpose: return repair.other.empty() ? "take the inverse of " + subject : "write " + other + " for " + subject;
      case solve::RepairKind::drop_inverse: return "write " + subject + " for " + other;
      case solve::RepairKind::swap:
      case solve::RepairKind::swap_arguments: return "exchange " + subject + " and " + other;
      case solve::RepairKind::other_variable: return "take " + other + " for " + subject;
      case solve::RepairKind::twin_function: return "call " + other + " for " + subject;
      case solve::RepairKind::two_sided: return repair.other.empty() ? "multiply by the inverse of " + subject + " on the right" : "multiply by " + other + " on the right";
    }
    return "";
  }

  const FileTable& files_;
  const Style& style_;
  Lines lines_;
};

nlohmann::ordered_json place_json(const Span& span, const FileTable& files, const std::string& root) {
  return {{"file", clean(relative(files.name(span.file), root))}, {"line", span.begin.line}, {"column", span.begin.column}, {"end line", span.end.line}, {"end column", span.end.column}};
}

const char* repair_word(solve::RepairKind kind) {
  switch (kind) {
    case solve::RepairKind::none: return "none";
    case solve::RepairKind::transpose: return "transpose";
    case solve::RepairKind::drop_inverse: return "drop inverse";
    case solve::RepairKind::swap: return "swap";
    case solve::RepairKind::swap_arguments: return "swap arguments";
    case solve::RepairKind::other_variable: return "other variable";
    case solve::RepairKind::twin_function: return "twin function";
    case solve::RepairKind::two_sided: return "two-sided";
  }
  return "none";
}

}  // namespace

std::string relative(const std::string& path, const std::string& root) {
  if (!root.empty() && path.rfind(root + "/", 0) == 0) return path.substr(root.size() + 1);
  return path;
}

void sort(std::vector<Finding>& findings, const FileTable& files) {
  auto key = [&](const Finding& f) { return std::tuple(files.name(f.span.file), f.span.begin, f.span.end, f.rule, f.sentence); };
  std::sort(findings.begin(), findings.end(), [&](const Finding& a, const Finding& b) { return key(a) < key(b); });
  auto same = [&](const Finding& a, const Finding& b) { return a.rule == b.rule && a.span == b.span; };
  findings.erase(std::unique(findings.begin(), findings.end(), same), findings.end());
}

std::string text(const std::vector<Finding>& findings, const FileTable& files, const Summary& summary, const Style& style) {
  Text text(files, style);
  for (const Finding& finding : findings) text.finding(finding);
  text.summary(findings, summary);
  return text.out;
}

std::string json(const std::vector<Finding>& findings, const FileTable& files, const Summary& summary, const Style& style) {
  nlohmann::ordered_json root, list = nlohmann::ordered_json::array();
  for (const Finding& finding : findings) {
    nlohmann::ordered_json entry = place_json(finding.span, files, style.root);
    entry["rule"] = finding.rule;
    entry["certainty"] = dextral::text(finding.certainty);
    entry["function"] = clean(finding.function);
    entry["sentence"] = clean(finding.sentence);
    entry["frames"] = {dextral::text(finding.left_frame), dextral::text(finding.right_frame)};
    for (const auto& [name, side] : {std::pair{"left", &finding.left}, std::pair{"right", &finding.right}}) {
      nlohmann::ordered_json steps = nlohmann::ordered_json::array();
      for (const Reason& reason : *side) {
        nlohmann::ordered_json step = place_json(reason.span, files, style.root);
        step["source"] = dextral::text(reason.source);
        step["words"] = words(reason);
        steps.push_back(step);
      }
      entry[name] = steps;
    }
    nlohmann::ordered_json repairs = nlohmann::ordered_json::array();
    for (const solve::Repair& repair : finding.repairs) {
      nlohmann::ordered_json edits = nlohmann::ordered_json::array();
      for (const solve::Edit& edit : repair.edits) {
        nlohmann::ordered_json e = place_json(edit.span, files, style.root);
        e["text"] = clean(edit.text);
        edits.push_back(e);
      }
      repairs.push_back({{"kind", repair_word(repair.kind)}, {"subject", clean(repair.subject)}, {"other", clean(repair.other)}, {"edits", edits}});
    }
    entry["repairs"] = repairs;
    if (finding.witness) entry["witness"] = {{"degrees", std::round(finding.witness->degrees * 1000) / 1000}, {"attitude", finding.witness->attitude}};
    list.push_back(entry);
  }
  root["findings"] = list;
  root["read"] = summary.read;
  root["not read"] = summary.not_read;
  root["missing headers"] = summary.missing_headers;
  root["rotations"] = {{"declarations", summary.rotations}, {"known", summary.rotations_known}};
  return root.dump(2, ' ', false, nlohmann::ordered_json::error_handler_t::replace) + "\n";
}

}  // namespace dextral::tell
