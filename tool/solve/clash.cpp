#include "solve/clash.h"

#include <algorithm>
#include <cctype>

namespace dextral::solve {

namespace {

bool is_tensor(const Hold& hold) {
  return hold.quantity.kind == Kind::tensor || hold.quantity.kind == Kind::covariance;
}

bool rotation_by_name(std::string name) {
  std::size_t start = name.find_last_of(".>");
  if (start != std::string::npos) name = name.substr(start + 1);
  if (name.rfind("m_", 0) == 0) name = name.substr(2);
  std::string lower;
  for (char c : name) lower += char(std::tolower(static_cast<unsigned char>(c)));
  for (const char* word : {"rot", "dcm", "quat", "att", "pose", "orient", "transf", "cosine"})
    if (lower.find(word) != std::string::npos) return true;
  static const std::string letters = "RCTQXrcq";
  return !name.empty() && letters.find(name[0]) != std::string::npos &&
         (name.size() == 1 || name[1] == '_' || std::isdigit(static_cast<unsigned char>(name[1])) ||
          (name.size() <= 3 && std::isupper(static_cast<unsigned char>(name[0]))));
}

// Where a proof uses a matrix twice that nothing says is a rotation, the matrix
// may be a gain or a scale that belongs to no frame. An input that nobody
// declares and that two branches use in two frames may have a flag beside it.
Certainty through_inputs(const Function& function, const Sheeted& sheeted, const std::vector<Edge>& chain) {
  std::vector<bool> rotation = rotations(function);
  std::set<ValueId> made;
  for (const Operation& op : function.operations) made.insert(op.result);
  std::map<NodeId, ValueId> owner;
  for (std::size_t i = 0; i < sheeted.values.size(); ++i)
    for (std::uint32_t s : {0u, 1u}) owner[NodeId(std::uint32_t(sheeted.values[i]) + s)] = ValueId(i);
  Certainty weakest = Certainty::certain;
  for (std::size_t i = 1; i < chain.size(); ++i) {
    const Edge &a = chain[i - 1], &b = chain[i];
    NodeId shared = a.a == b.a || a.a == b.b ? a.a : a.b;
    auto found = owner.find(shared);
    if (found == owner.end() || a.operation == b.operation) continue;
    const Value& value = function.values.at(std::size_t(found->second));
    auto is_hold = [&](const Edge& e) { return function.operations.at(e.operation).kind == OperationKind::hold; };
    const bool apart = exclude_each_other(function.operations.at(a.operation), function.operations.at(b.operation));
    if (apart && !made.contains(found->second) && !is_hold(a) && !is_hold(b)) return Certainty::suspect;
    if (value.shape != Shape::matrix || rotation[std::size_t(found->second)] || made.contains(found->second) ||
        is_hold(a) || is_hold(b))
      continue;
    weakest = weaker(weakest, rotation_by_name(value.text) ? Certainty::likely : Certainty::suspect);
  }
  return weakest;
}

std::string operand_text(const Function& function, const Operation& op, int operand) {
  if (op.kind == OperationKind::call) {
    const Call& call = function.calls.at(op.item);
    if (operand == kResult) return call.name;
    return call.bindings.at(std::size_t(operand)).text;
  }
  if (op.kind == OperationKind::hold && operand == kResult) return function.holds.at(op.item).subject;
  if (operand == kResult) return op.target.empty() ? op.text : op.target;
  return op.operands.at(std::size_t(operand)).text;
}

// `own body` of which object, as the code names it: "p0.imu" -> "state.imu".
Frame of_object(const Function& function, Frame frame) {
  if (!frame.own) return frame;
  const std::size_t end = std::min(frame.owner.find_first_of(".["), frame.owner.size());
  const std::string root = frame.owner.substr(0, end), rest = frame.owner.substr(end);
  const bool formal = root.size() > 1 && root[0] == 'p' && std::isdigit(static_cast<unsigned char>(root[1]));
  const std::size_t index = formal ? std::stoul(root.substr(1)) : std::string::npos;
  if (index < function.parameter_names.size()) frame.owner = function.parameter_names[index] + rest;
  else if (root == "this") frame.owner = rest.empty() ? "this" : rest.substr(1);
  else frame.owner.clear();
  return frame;
}

bool only_declared(const std::vector<Reason>& proof) {
  return std::all_of(proof.begin(), proof.end(), [](const Reason& r) { return r.kind == ReasonKind::declared; });
}

ClashKind kind_of(const Function& function, const Sheeted& sheeted, const Conflict& conflict, const Clash& clash) {
  const Operation& op = function.operations.at(conflict.operation);
  if (!clash.repairs.empty() && clash.repairs[0].kind == RepairKind::two_sided) return ClashKind::tensor;
  if (op.kind != OperationKind::hold) return ClashKind::frames;
  const Hold& hold = function.holds.at(op.item);
  if (is_of_phrases(function, sheeted, conflict)) return ClashKind::contract;
  if (hold.contract && only_declared(clash.left_proof) && only_declared(clash.right_proof)) return ClashKind::contract;
  if (is_tensor(hold) && clash.repairs.empty()) return ClashKind::tensor;
  return ClashKind::frames;
}

}  // namespace

std::vector<bool> rotations(const Function& function) {
  std::vector<bool> known;
  for (const Value& value : function.values)
    known.push_back(value.rotation || value.shape == Shape::rotation || value.shape == Shape::quaternion ||
                    value.shape == Shape::pose);
  auto is = [&](ValueId id) { return id != ValueId::none && known[std::size_t(id)]; };
  for (const Operation& op : function.operations) {
    if (op.kind == OperationKind::hold) {
      Kind kind = function.holds.at(op.item).quantity.kind;
      if (kind == Kind::passive || kind == Kind::active) known[std::size_t(op.operands[0].value)] = true;
    }
    if (op.result == ValueId::none || op.operands.empty()) continue;
    bool all = std::all_of(op.operands.begin(), op.operands.end(), [&](const Operand& o) { return is(o.value); });
    bool keeps = op.kind == OperationKind::product || op.kind == OperationKind::transpose ||
                 op.kind == OperationKind::inverse || op.kind == OperationKind::copy;
    if (keeps && all) known[std::size_t(op.result)] = true;
  }
  return known;
}

Clash clash_of(const Function& function, Sheeted& sheeted, const Conflict& conflict, const Culprit& culprit) {
  Clash clash;
  const Operation& op = function.operations.at(conflict.operation);
  const Sheet& sheet = sheeted.sheet;
  clash.span = op.kind == OperationKind::hold && !op.span.valid() ? function.holds.at(op.item).phrase : op.span;
  clash.function = function.name;
  clash.expression = op.text;
  clash.operation = op.kind;
  clash.subject = operand_text(function, op, conflict.left_operand);
  clash.object = operand_text(function, op, conflict.right_operand);
  if (const Frame* frame = sheet.frame(conflict.left)) clash.left = of_object(function, *frame);
  if (const Frame* frame = sheet.frame(conflict.right)) clash.right = of_object(function, *frame);
  clash.certainty = conflict.certainty;
  auto prove = [&](NodeId side) {
    std::vector<Edge> chain = sheet.path(side, sheet.constant_of(side));
    for (const Edge& edge : chain) clash.certainty = weaker(clash.certainty, edge.certainty);
    return std::pair(reasons(function, chain), chain);
  };
  auto [left_proof, chain] = prove(conflict.left);
  auto [right_proof, right_chain] = prove(conflict.right);
  clash.left_proof = std::move(left_proof);
  clash.right_proof = std::move(right_proof);
  // From the one constant to the other, through the place where they meet.
  std::reverse(chain.begin(), chain.end());
  chain.push_back({conflict.left, conflict.right, conflict.operation, conflict.certainty, conflict.via});
  chain.insert(chain.end(), right_chain.begin(), right_chain.end());
  clash.certainty = weaker(clash.certainty, through_inputs(function, sheeted, chain));
  if (conflict.via) {
    auto& side = conflict.left_operand == kResult ? clash.left_proof : clash.right_proof;
    side.insert(side.begin(), conflict.via->proof.begin(), conflict.via->proof.end());
  }
  if (op.kind == OperationKind::hold) {
    const Hold& hold = function.holds.at(op.item);
    clash.right_proof.insert(clash.right_proof.begin(), {ReasonKind::declared, hold.source, hold.phrase, hold.subject, hold.said});
  }
  if (is_of_phrases(function, sheeted, conflict)) clash.subject = function.holds.at(op.item).subject;
  clash.repairs = culprit.repairs;
  clash.kind = kind_of(function, sheeted, conflict, clash);
  return clash;
}

}  // namespace dextral::solve
