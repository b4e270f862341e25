#include "core/algebra.h"

namespace dextral {

const char* text(OperationKind kind) {
  switch (kind) {
    case OperationKind::product: return "product";
    case OperationKind::transpose: return "transpose";
    case OperationKind::inverse: return "inverse";
    case OperationKind::copy: return "copy";
    case OperationKind::sum: return "sum";
    case OperationKind::difference: return "difference";
    case OperationKind::cross: return "cross";
    case OperationKind::dot: return "dot";
    case OperationKind::skew: return "skew";
    case OperationKind::unskew: return "unskew";
    case OperationKind::translation: return "translation";
    case OperationKind::pose: return "pose";
    case OperationKind::column: return "column";
    case OperationKind::row: return "row";
    case OperationKind::transform: return "transform";
    case OperationKind::shuffle: return "shuffle";
    case OperationKind::join: return "join";
    case OperationKind::hold: return "hold";
    case OperationKind::call: return "call";
  }
  return "unknown";
}

}  // namespace dextral
