// Facts to bytes and back, and damaged bytes.
#include <gtest/gtest.h>

#include "core/facts.h"

namespace dextral {
namespace {

Span span(FileId file, std::uint32_t line) { return {file, {line, 2}, {line, 9}}; }

Quantity covariance_of_position() {
  Quantity position;
  position.kind = Kind::position;
  position.in = Frame{.name = "ned"};
  position.from_point = "base";
  position.to_point = "mast";
  Quantity covariance;
  covariance.kind = Kind::covariance;
  covariance.stored = {"roll", "pitch", "yaw"};
  covariance.hand = Hand::left;
  covariance.seen_from = Frame{.name = "body", .tag = "k", .own = true, .owner = "this.imu"};
  covariance.of = std::make_shared<const Quantity>(position);
  return covariance;
}

// `state` is shared by two snapshots of one call.
Function function_with_everything(FileId file) {
  auto imu = std::make_shared<const Snapshot>(Snapshot{"this.imu", 3, {{"R", ValueId(1)}}});
  auto state = std::make_shared<const Snapshot>(Snapshot{"this.state", 2, {{"imu", imu}, {"v", ValueId::none}}});
  Function f{.key = "k", .name = "nav::step", .span = span(file, 4), .body = true, .template_instance = true};
  f.parameter_names = {"a", "b"};
  f.overrides = {"base"};
  f.values = {{Shape::rotation, true, "R", "{}.transpose()", span(file, 5)}, {Shape::vector, false, "caf\xe9", "", {}}};
  f.operations = {{OperationKind::shuffle,
                   ValueId(1),
                   {{ValueId(0), span(file, 6), "R"}},
                   {-3, 0, 1},
                   7,
                   ReasonKind::passed,
                   span(file, 6),
                   "R * v",
                   "w"}};
  f.holds = {{covariance_of_position(), Source::remarked, "covariance of ...", span(file, 7), "P", true, 4, "p0"}};
  f.calls = {{"other",
              "nav::other",
              true,
              {{"p0", Snapshot{"l1", 1, {{"a", state}, {"b", state}, {"c", imu}}}, ValueId(1), span(file, 8), "s"}}}};
  f.readings = {{"p0.x", 9, ValueId(1)}};
  f.exits = {{"return", ValueId(0)}, {"this", Snapshot{"this", 5, {{"state", state}}}}};
  f.declarations = {{ValueId(1), "w", span(file, 9), true}};
  return f;
}

Facts everything() {
  Facts facts;
  facts.unit = "/p/nav.cpp";
  facts.read = true;
  facts.not_read_because = "";
  FileId source = facts.files.add("/p/nav.cpp");
  FileId header = facts.files.add("/p/nav.h");
  facts.functions = {function_with_everything(source), Function{.key = "other"}};
  facts.fields = {{"nav::State::R", "R", span(header, 3), true, true}};
  facts.complaints = {{ComplaintKind::missing_header, span(source, 1), "gone.h", "not found", "done.h"}};
  facts.acceptances = {{{"wrong-order", "by design"}, span(source, 2), {2, 1}, {3, 80}}};
  return facts;
}

TEST(FactsCodec, GivesBackWhatItTook) {
  std::string bytes = encode(everything());
  std::optional<Facts> back = decode(bytes);
  ASSERT_TRUE(back);
  EXPECT_EQ(encode(*back), bytes);
  EXPECT_EQ(back->unit, "/p/nav.cpp");
  EXPECT_TRUE(back->read);
  EXPECT_EQ(back->files.names(), everything().files.names());
  ASSERT_EQ(back->functions.size(), 2u);
  EXPECT_EQ(print(back->functions[0], back->files), print(everything().functions[0], back->files));
  EXPECT_EQ(back->functions[0].holds[0].quantity, covariance_of_position());
  EXPECT_EQ(back->functions[0].values[1].text, "caf\xe9");
  EXPECT_EQ(back->functions[0].operations[0].numbers, (std::vector<int>{-3, 0, 1}));
  EXPECT_EQ(back->functions[0].operations[0].span, span(FileId(0), 6));
  EXPECT_EQ(back->fields[0].span.file, FileId(1));
  EXPECT_EQ(back->complaints[0].nearest, "done.h");
  EXPECT_EQ(back->acceptances[0].to, (Position{3, 80}));
}

TEST(FactsCodec, KeepsSnapshotsShared) {
  Facts back = decode(encode(everything())).value();
  const Function& f = back.functions[0];
  using Shared = std::shared_ptr<const Snapshot>;
  const auto& given = std::get<Snapshot>(f.calls[0].bindings[0].before);
  const auto& state = std::get<Shared>(given.parts[0].is);
  EXPECT_EQ(state, std::get<Shared>(given.parts[1].is));
  EXPECT_EQ(state, std::get<Shared>(std::get<Snapshot>(f.exits[1].second).parts[0].is));
  EXPECT_EQ(std::get<Shared>(state->parts[0].is), std::get<Shared>(given.parts[2].is));
}

TEST(FactsCodec, SharingKeepsTheBytesFew) {
  auto snapshot = std::make_shared<const Snapshot>(Snapshot{"leaf", 0, {}});
  for (int depth = 0; depth < 60; ++depth)
    snapshot = std::make_shared<const Snapshot>(Snapshot{"n", 0, {{"a", snapshot}, {"b", snapshot}}});
  Facts facts;
  facts.functions = {Function{.key = "f", .exits = {{"return", *snapshot}}}};
  std::string bytes = encode(facts);
  EXPECT_LT(bytes.size(), 10000u);
  EXPECT_EQ(encode(decode(bytes).value()), bytes);
}

TEST(FactsCodec, EmptyFactsToo) { EXPECT_EQ(encode(decode(encode(Facts{})).value()), encode(Facts{})); }

TEST(FactsCodec, DamagedBytesGiveNothing) {
  const std::string bytes = encode(everything());
  for (std::size_t cut = 0; cut < bytes.size(); ++cut) EXPECT_FALSE(decode(bytes.substr(0, cut))) << "cut at " << cut;
  for (std::size_t place = 0; place < bytes.size(); ++place) {
    std::string damaged = bytes;
    damaged[place] = char(damaged[place] ^ 0x41);
    EXPECT_FALSE(decode(damaged)) << "changed at " << place;
  }
  EXPECT_FALSE(decode(bytes + "x"));
  EXPECT_FALSE(decode(std::string(100, '\x81')));
}

}  // namespace
}  // namespace dextral
