#include "run/commands.h"

#include <unistd.h>

#include <cstdlib>

#include <CLI/CLI.hpp>
#include <algorithm>
#include <map>
#include <sstream>

namespace dextral::run {

namespace {

const char kAbout[] =
    "Reads C and C++ and tells where coordinate frames or rotation conventions contradict each other.\n"
    "An aid: a clean report is no proof of safety.";

const char kFooter[] =
    "Exit status: 0 nothing at or above --fail-on, 1 findings, 2 the call or the project file is wrong,\n"
    "3 something could not be read (see --allow-unread). The higher one wins.";

const std::map<std::string, Certainty> kCertainties{
    {"certain", Certainty::certain}, {"likely", Certainty::likely}, {"suspect", Certainty::suspect}};
const std::map<std::string, std::optional<Certainty>> kThresholds{{"certain", Certainty::certain},
                                                                  {"likely", Certainty::likely},
                                                                  {"suspect", Certainty::suspect},
                                                                  {"never", std::nullopt}};
const std::map<std::string, Format> kFormats{{"text", Format::text}, {"sarif", Format::sarif}, {"json", Format::json}};
const std::map<std::string, Format> kPlainFormats{{"text", Format::text}, {"json", Format::json}};
const std::map<std::string, Color> kColors{
    {"auto", Color::automatic}, {"always", Color::always}, {"never", Color::never}};

// An option whose value is one of the words of a table.
template <class T>
void add_choice(CLI::App& app, const std::string& name, T& value, const std::map<std::string, T>& words,
                const std::string& about) {
  std::vector<std::string> allowed;
  for (const auto& [word, meaning] : words) allowed.push_back(word);
  app.add_option_function<std::string>(
         name, [&](const std::string& word) { value = words.at(word); }, about)
      ->check(CLI::IsMember(allowed).description(""))
      ->type_name("WORD");
}

void add_project(CLI::App& app, project::Request& request) {
  app.add_option("--project", request.project_file, "The project file; else dextral.json, searched upwards")
      ->type_name("FILE");
  app.add_option("--compile-commands", request.compile_commands,
                 "compile_commands.json or its folder; else searched upwards")
      ->type_name("FILE_OR_FOLDER");
  app.add_option("--models", request.models_folder, "The library models; else those that came with the program")
      ->type_name("FOLDER");
}

void add_limits(CLI::App& app, Limits& limits) {
  app.add_option("-j,--jobs", limits.workers, "Files read at a time; else one for each core, as memory allows")
      ->check(CLI::Range(1, 1024).description(""))
      ->type_name("N");
  app.add_option("--time-limit", limits.seconds, "Seconds for one file")
      ->check(CLI::Range(0.001, 1e6).description(""))
      ->type_name("SECONDS")
      ->capture_default_str();
  app.add_option("--memory-limit", limits.megabytes, "Megabytes for one file")
      ->check(CLI::Range(64, 1 << 20).description(""))
      ->type_name("MB")
      ->capture_default_str();
  app.add_flag("--in-process", limits.in_process)->group("");
}

void add_report(CLI::App& app, Lint& lint) {
  add_choice(app, "--format", lint.format, kFormats, "text (default), sarif (SARIF 2.1.0) or json");
  app.add_option("--output", lint.output, "Write the report here, not to standard output")->type_name("FILE");
  add_choice(app, "--fail-on", lint.fail_on, kThresholds,
             "Exit status 1 from this certainty on: certain (default), likely, suspect, never");
  add_choice(app, "--show", lint.show, kCertainties, "Tell from this certainty on: certain, likely, suspect (default)");
  add_choice(app, "--color", lint.color, kColors, "auto (default), always, never");
  app.add_flag("--allow-unread", lint.allow_unread, "What could not be read does not change the exit status");
  app.add_flag("--probe", lint.probe, "Run small functions of the sources in a bounded evaluator, and use what they measure as");
  app.add_option("--known", lint.known, "Findings listed in FILE are known and not told")->type_name("FILE");
  app.add_option("--update-known", lint.update_known, "List the findings of this run in FILE")->type_name("FILE");
  app.add_flag("--write-repairs", lint.write_repairs, "Write the repairs of certain findings into the sources");
  app.add_flag("--dry-run", lint.dry_run, "Show the repairs as a unified diff; write nothing");
}

void add_probe(CLI::App& app, Probe& probe) {
  app.add_option("NAME", probe.name, "The function, with or without its scope")->type_name("");
  app.add_flag("--all", probe.all, "All functions that take and give a few numbers, one line each");
  app.add_option("--in", probe.request.paths, "The file that has it, and files with what it calls; else all of compile_commands.json")
      ->type_name("FILE");
  add_choice(app, "--format", probe.format, kPlainFormats, "text (default) or json");
  add_project(app, probe.request);
  add_limits(app, probe.limits);
}

Answered wrong_call(const std::string& message) {
  return {Status::wrong_call, "", "dextral: " + message + "\n`dextral --help` lists what can be said.\n"};
}

// The part after a lone `--`, which is Clang's.
std::vector<std::string> take_flags(std::vector<std::string>& arguments) {
  auto line = std::find(arguments.begin(), arguments.end(), "--");
  if (line == arguments.end()) return {};
  std::vector<std::string> flags(line + 1, arguments.end());
  arguments.erase(line, arguments.end());
  return flags;
}

std::optional<std::string> no_command(const std::vector<std::string>& arguments) {
  const std::vector<std::string> commands{"lint", "rules", "facts", "probe"};
  if (arguments.empty()) return "say what to do: lint, probe, rules or facts";
  const std::string& word = arguments.front();
  if (word.starts_with("-") || std::find(commands.begin(), commands.end(), word) != commands.end()) return std::nullopt;
  return "`" + word + "` is no command; lint, probe, rules and facts are";
}

}  // namespace

Command parse(const std::vector<std::string>& given) {
  std::vector<std::string> arguments = given;
  Lint lint;
  ShowRules rules;
  ShowFacts facts;
  Probe probe;
  lint.request.flags = facts.request.flags = probe.request.flags = take_flags(arguments);

  CLI::App app(kAbout, "dextral");
  app.set_version_flag("--version", std::string("dextral ") + DEXTRAL_VERSION);
  app.footer(kFooter);
  app.require_subcommand(1);
  CLI::App* lint_command = app.add_subcommand("lint", "Read sources and tell the findings; flags for Clang after --");
  lint_command->footer(kFooter);
  lint_command->add_option("PATH", lint.request.paths, "Files or folders; else all of compile_commands.json")
      ->type_name("");
  add_report(*lint_command, lint);
  add_project(*lint_command, lint.request);
  add_limits(*lint_command, lint.limits);
  CLI::App* rules_command = app.add_subcommand("rules", "List the rules, or show the page of one");
  rules_command->add_option("ID", rules.id, "The rule")->type_name("");
  CLI::App* facts_command = app.add_subcommand("facts", "Print what is read from one file; flags for Clang after --");
  facts_command->add_option("FILE", facts.request.paths, "The file")->required()->expected(1)->type_name("");
  add_project(*facts_command, facts.request);
  add_limits(*facts_command, facts.limits);
  CLI::App* probe_command = app.add_subcommand("probe", "Run small maths functions and tell what they are; flags for Clang after --");
  add_probe(*probe_command, probe);

  if (std::optional<std::string> wrong = no_command(arguments)) return wrong_call(*wrong);
  std::reverse(arguments.begin(), arguments.end());  // as CLI11 takes them
  try {
    app.parse(std::move(arguments));
  } catch (const CLI::ParseError& error) {
    std::ostringstream output, messages;
    if (app.exit(error, output, messages) == 0) return Answered{Status::clean, output.str(), ""};
    return wrong_call(error.what());
  }
  if (lint.write_repairs && lint.dry_run) return wrong_call("--write-repairs and --dry-run exclude each other");
  if (*lint_command) return lint;
  if (*rules_command) return rules;
  if (*probe_command) {
    if (probe.all == !probe.name.empty()) return wrong_call("probe one function, `dextral probe NAME`, or `--all`");
    return probe;
  }
  return facts;
}

bool shows(const Lint& lint, Certainty certainty) { return certainty <= lint.show; }

bool fails(const Lint& lint, Certainty certainty) { return lint.fail_on && certainty <= *lint.fail_on; }

bool colored(const Lint& asked) {
  if (asked.color != Color::automatic) return asked.color == Color::always;
  const char* never = std::getenv("NO_COLOR");
  return asked.output.empty() && !(never && *never) && isatty(1);
}

Status status(const Lint& lint, bool all_read, const std::vector<Certainty>& findings) {
  if (!all_read && !lint.allow_unread) return Status::not_read;
  const bool failed = std::any_of(findings.begin(), findings.end(), [&](Certainty c) { return fails(lint, c); });
  return failed ? Status::findings : Status::clean;
}

}  // namespace dextral::run
