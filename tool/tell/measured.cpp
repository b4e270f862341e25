#include "tell/measured.h"

#include <algorithm>
#include <cstdio>
#include <nlohmann/json.hpp>
#include <tuple>

#include "tell/source.h"

namespace dextral::tell {

namespace {

using Json = nlohmann::ordered_json;

std::string number(double value, const char* format = "%.6g") {
  char digits[40];
  std::snprintf(digits, sizeof digits, format, value);
  return digits;
}

std::string place(const Measurement& measurement, const FileTable& files, const Style& style) {
  return escaped(relative(files.name(measurement.span.file), style.root)) + ":" + std::to_string(measurement.span.begin.line) + ":" +
         std::to_string(measurement.span.begin.column);
}

std::string said_formal(const Measurement& measurement, const std::string& formal) {
  for (const Group& group : measurement.signature.inputs)
    if (group.formal == formal) return escaped(group.text);
  return escaped(formal);
}

// "dcm_from_euler with seq = 321"
std::string title(const Measurement& measurement) {
  std::string title = escaped(measurement.name);
  for (std::size_t i = 0; i < measurement.selected.size(); ++i)
    title += (i ? ", " : " with ") + said_formal(measurement, measurement.selected[i].formal) + " = " + std::to_string(measurement.selected[i].value);
  return title;
}

std::string said(const Group& group) {
  if (group.rows && group.columns) return escaped(group.text) + " (" + std::to_string(group.rows) + " x " + std::to_string(group.columns) + ")";
  return escaped(group.text) + (group.count == 1 ? "" : " (" + std::to_string(group.count) + ")");
}

std::string said(const std::vector<Group>& groups) {
  std::string text;
  for (const Group& group : groups)
    if (group.count) text += (text.empty() ? "" : ", ") + said(group);
  return text.empty() ? "nothing" : text;
}

std::string with_formula(const Meaning& meaning) {
  return escaped(meaning.formula.empty() ? meaning.words : meaning.words + ": " + meaning.formula);
}

// One line: what it is, or why that is not known.
std::string verdict(const Measurement& measurement) {
  if (!measurement.refusal.empty()) return "not measured: " + escaped(measurement.refusal);
  if (measurement.meanings.empty()) return "nothing that is known";
  if (measurement.meanings.size() == 1) return with_formula(measurement.meanings[0]);
  std::string text = "one of " + std::to_string(measurement.meanings.size()) + " that cannot be told apart: ";
  for (std::size_t i = 0; i < measurement.meanings.size(); ++i) text += (i ? "; or " : "") + with_formula(measurement.meanings[i]);
  return text;
}

// A matrix row by row, however it lies in memory.
std::string numbers(const Group& group, const double* values) {
  std::string text;
  for (std::size_t i = 0; i < group.count; ++i) {
    const bool matrix = group.rows * group.columns == group.count && group.rows > 1;
    const std::size_t row = matrix ? i / group.columns : 0, column = matrix ? i % group.columns : i;
    if (row > 0 && column == 0) text += ";";
    text += " " + number(values[group.column_major && matrix ? column * group.rows + row : i]);
  }
  return text;
}

std::string numbers(const std::vector<Group>& groups, const std::vector<double>& values) {
  std::string text;
  std::size_t at = 0;
  for (const Group& group : groups) {
    if (group.count == 0 || at + group.count > values.size()) continue;
    text += "      " + escaped(group.text) + " =" + numbers(group, values.data() + at) + "\n";
    at += group.count;
  }
  return text;
}

std::string trial(const Measurement& measurement) {
  if (measurement.trials.empty()) return "";
  const Trial& trial = measurement.trials[0];
  return "    by hand: given\n" + numbers(measurement.signature.inputs, trial.input) + "    it gives\n" +
         numbers(measurement.signature.outputs, trial.output);
}

std::string paragraph(const Measurement& measurement, const FileTable& files, const Style& style) {
  std::string text = place(measurement, files, style) + ": " + title(measurement) + "\n  " + verdict(measurement) + "\n";
  for (const Meaning& meaning : measurement.meanings)
    for (const std::string& other : meaning.equivalents) text += "    which is also " + escaped(other) + "\n";
  if (measurement.signature.outputs.empty()) return text;
  text += "    takes " + said(measurement.signature.inputs) + "; gives " + said(measurement.signature.outputs) + "\n";
  text += "    run at " + std::to_string(measurement.points) + " points";
  if (!measurement.meanings.empty()) text += ", worst disagreement " + number(measurement.worst, "%.1e");
  return text + ", at most " + std::to_string(measurement.steps) + " steps\n" + trial(measurement);
}

Json groups(const std::vector<Group>& list) {
  Json json = Json::array();
  for (const Group& group : list)
    json.push_back({{"formal", group.formal}, {"text", escaped(group.text)}, {"count", group.count}, {"rows", group.rows}, {"columns", group.columns}});
  return json;
}

Json json_of(const Measurement& measurement, const FileTable& files, const Style& style) {
  Json json{{"file", escaped(relative(files.name(measurement.span.file), style.root))},
            {"line", measurement.span.begin.line},
            {"column", measurement.span.begin.column},
            {"function", escaped(measurement.name)},
            {"key", escaped(measurement.key)},
            {"selected", Json::array()},
            {"inputs", groups(measurement.signature.inputs)},
            {"outputs", groups(measurement.signature.outputs)},
            {"meanings", Json::array()},
            {"refusal", measurement.refusal},
            {"points", measurement.points},
            {"steps", measurement.steps},
            {"worst disagreement", measurement.worst},
            {"trials", Json::array()}};
  for (const Selected& one : measurement.selected) json["selected"].push_back({{"formal", one.formal}, {"value", one.value}});
  for (const Meaning& meaning : measurement.meanings)
    json["meanings"].push_back(
        {{"id", meaning.id}, {"words", meaning.words}, {"formula", meaning.formula}, {"equivalents", meaning.equivalents}});
  for (const Trial& trial : measurement.trials) json["trials"].push_back({{"given", trial.input}, {"gives", trial.output}});
  return json;
}

}  // namespace

void sort(std::vector<Measurement>& list, const FileTable& files) {
  auto order = [&](const Measurement& m) {
    std::vector<std::pair<std::string, long long>> selected;
    for (const Selected& one : m.selected) selected.emplace_back(one.formal, one.value);
    return std::tuple(files.name(m.span.file), m.span.begin, m.key, selected);
  };
  std::sort(list.begin(), list.end(), [&](const Measurement& a, const Measurement& b) { return order(a) < order(b); });
}

std::string text(const std::vector<Measurement>& list, const FileTable& files, const Style& style) {
  std::string text;
  for (const Measurement& measurement : list) text += paragraph(measurement, files, style);
  return text;
}

std::string table(const std::vector<Measurement>& list, const FileTable& files, const Style& style) {
  std::string text;
  std::size_t known = 0, open = 0, unknown = 0, refused = 0, functions = 0;
  for (std::size_t i = 0; i < list.size();) {
    const Measurement& m = list[i];
    std::size_t alike = i + 1;
    while (alike < list.size() && list[alike].key == m.key && verdict(list[alike]) == verdict(m)) ++alike;
    const std::string more = alike > i + 1 ? " (and " + std::to_string(alike - i - 1) + " more)" : "";
    text += place(m, files, style) + ": " + title(m) + more + ": " + verdict(m) + "\n";
    functions += i == 0 || list[i - 1].key != m.key;
    for (; i < alike; ++i) ++(!m.refusal.empty() ? refused : m.meanings.empty() ? unknown : m.meanings.size() == 1 ? known : open);
  }
  return text + std::to_string(functions) + " functions, " + std::to_string(list.size()) + " measurements: " + std::to_string(known) +
         " known, " + std::to_string(open) + " open between several, " + std::to_string(unknown) + " nothing that is known, " +
         std::to_string(refused) + " refused\n";
}

std::string json(const std::vector<Measurement>& list, const FileTable& files, const Style& style) {
  Json json{{"functions", Json::array()}};
  for (const Measurement& measurement : list) json["functions"].push_back(json_of(measurement, files, style));
  return json.dump(2, ' ', false, Json::error_handler_t::replace) + "\n";
}

}  // namespace dextral::tell
