// The command line as values, and the exit status.
#include "run/commands.h"

#include <gtest/gtest.h>

namespace dextral::run {
namespace {

Lint lint(std::vector<std::string> arguments) {
  arguments.insert(arguments.begin(), "lint");
  Command command = parse(arguments);
  if (auto* answered = std::get_if<Answered>(&command)) ADD_FAILURE() << answered->error;
  return std::holds_alternative<Lint>(command) ? std::get<Lint>(command) : Lint{};
}

Answered answered(const std::vector<std::string>& arguments) {
  Command command = parse(arguments);
  if (!std::holds_alternative<Answered>(command)) ADD_FAILURE() << "taken as a command";
  return std::holds_alternative<Answered>(command) ? std::get<Answered>(command) : Answered{};
}

TEST(Commands, LintWithoutOptions) {
  Lint got = lint({});
  EXPECT_TRUE(got.request.paths.empty());
  EXPECT_EQ(got.format, Format::text);
  EXPECT_EQ(got.fail_on, Certainty::certain);
  EXPECT_EQ(got.show, Certainty::suspect);
  EXPECT_EQ(got.limits.workers, 0u);
  EXPECT_EQ(got.limits.seconds, 120);
}

TEST(Commands, LintTakesPathsAndFlagsForClang) {
  Lint got = lint({"a.cpp", "src", "-j", "3", "--", "-Iinclude", "--", "-j9"});
  EXPECT_EQ(got.request.paths, (std::vector<std::string>{"a.cpp", "src"}));
  EXPECT_EQ(got.request.flags, (std::vector<std::string>{"-Iinclude", "--", "-j9"}));
  EXPECT_EQ(got.limits.workers, 3u);
}

TEST(Commands, LintTakesEveryOption) {
  Lint got = lint({"--format",
                   "sarif",
                   "--output",
                   "o",
                   "--fail-on",
                   "never",
                   "--show",
                   "likely",
                   "-j2",
                   "--time-limit",
                   "1.5",
                   "--memory-limit",
                   "512",
                   "--project",
                   "p",
                   "--compile-commands",
                   "c",
                   "--models",
                   "m",
                   "--dry-run",
                   "--known",
                   "k",
                   "--update-known",
                   "u",
                   "--allow-unread",
                   "--color",
                   "always",
                   "--in-process"});
  EXPECT_EQ(got.format, Format::sarif);
  EXPECT_EQ(got.output, "o");
  EXPECT_EQ(got.fail_on, std::nullopt);
  EXPECT_EQ(got.show, Certainty::likely);
  EXPECT_EQ(got.limits.seconds, 1.5);
  EXPECT_EQ(got.limits.megabytes, 512u);
  EXPECT_EQ(got.request.project_file, "p");
  EXPECT_EQ(got.request.compile_commands, "c");
  EXPECT_EQ(got.request.models_folder, "m");
  EXPECT_EQ(got.known, "k");
  EXPECT_EQ(got.update_known, "u");
  EXPECT_TRUE(got.dry_run && got.allow_unread && got.limits.in_process);
  EXPECT_EQ(got.color, Color::always);
  EXPECT_TRUE(lint({"--write-repairs"}).write_repairs);
}

TEST(Commands, RulesAndFacts) {
  EXPECT_EQ(std::get<ShowRules>(parse({"rules"})).id, "");
  EXPECT_EQ(std::get<ShowRules>(parse({"rules", "wrong-order"})).id, "wrong-order");
  ShowFacts facts = std::get<ShowFacts>(parse({"facts", "a.cpp", "--", "-std=c++14"}));
  EXPECT_EQ(facts.request.paths, std::vector<std::string>{"a.cpp"});
  EXPECT_EQ(facts.request.flags, std::vector<std::string>{"-std=c++14"});
}

TEST(Commands, HelpAndVersionAreAnswered) {
  EXPECT_EQ(answered({"--version"}).output, std::string("dextral ") + DEXTRAL_VERSION + "\n");
  Answered help = answered({"lint", "--help"});
  EXPECT_EQ(help.status, Status::clean);
  EXPECT_NE(help.output.find("--fail-on"), std::string::npos);
  EXPECT_EQ(help.output.find("in-process"), std::string::npos);
  EXPECT_NE(answered({"--help"}).output.find("no proof of safety"), std::string::npos);
}

TEST(Commands, AWrongCallSaysWhatIsWrong) {
  for (const std::vector<std::string>& call :
       std::vector<std::vector<std::string>>{{},
                                             {"link"},
                                             {"lint", "--formt", "text"},
                                             {"lint", "--format", "xml"},
                                             {"lint", "-j", "0"},
                                             {"lint", "--time-limit", "-1"},
                                             {"lint", "--write-repairs", "--dry-run"},
                                             {"facts"},
                                             {"rules", "a", "b"}}) {
    Answered got = answered(call);
    EXPECT_EQ(got.status, Status::wrong_call);
    EXPECT_TRUE(got.error.starts_with("dextral: ")) << got.error;
  }
  EXPECT_NE(answered({"lint", "--format", "xml"}).error.find("xml"), std::string::npos);
  EXPECT_NE(answered({"lint", "--formt"}).error.find("--formt"), std::string::npos);
  EXPECT_NE(answered({"link"}).error.find("`link` is no command"), std::string::npos);
}

TEST(Commands, TheHigherStatusWins) {
  Lint options;
  EXPECT_EQ(status(options, true, {}), Status::clean);
  EXPECT_EQ(status(options, true, {Certainty::likely, Certainty::suspect}), Status::clean);
  EXPECT_EQ(status(options, true, {Certainty::likely, Certainty::certain}), Status::findings);
  EXPECT_EQ(status(options, false, {}), Status::not_read);
  EXPECT_EQ(status(options, false, {Certainty::certain}), Status::not_read);
  options.allow_unread = true;
  EXPECT_EQ(status(options, false, {}), Status::clean);
  EXPECT_EQ(status(options, false, {Certainty::certain}), Status::findings);
  options.fail_on = Certainty::suspect;
  EXPECT_EQ(status(options, true, {Certainty::suspect}), Status::findings);
  options.fail_on = std::nullopt;
  EXPECT_EQ(status(options, true, {Certainty::certain}), Status::clean);
}

TEST(Commands, ProbeTakesANameOrAll) {
  const Command one = parse({"probe", "nav::mxm", "--in", "kit.c", "--format", "json", "--", "-Iinclude"});
  ASSERT_TRUE(std::holds_alternative<Probe>(one));
  EXPECT_EQ(std::get<Probe>(one).name, "nav::mxm");
  EXPECT_EQ(std::get<Probe>(one).request.paths, (std::vector<std::string>{"kit.c"}));
  EXPECT_EQ(std::get<Probe>(one).request.flags, (std::vector<std::string>{"-Iinclude"}));
  EXPECT_EQ(std::get<Probe>(one).format, Format::json);
  const Command all = parse({"probe", "--all", "--in", "a.c", "--in", "b.c"});
  ASSERT_TRUE(std::holds_alternative<Probe>(all));
  EXPECT_TRUE(std::get<Probe>(all).all);
  EXPECT_EQ(std::get<Probe>(all).request.paths, (std::vector<std::string>{"a.c", "b.c"}));
  EXPECT_EQ(answered({"probe"}).status, Status::wrong_call);
  EXPECT_EQ(answered({"probe", "mxm", "--all"}).status, Status::wrong_call);
  EXPECT_EQ(answered({"probe", "mxm", "--format", "sarif"}).status, Status::wrong_call);
}

}  // namespace
}  // namespace dextral::run
