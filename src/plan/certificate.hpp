// The proof of a lower bound of an offset problem as plain data, and its text form, `*.cert`.
//
// All entries are whole numbers in units of 1 / scale of the problem's costs. The proof first simplifies the problem by steps that change
// no optimum, then splits the cost of the remaining edges:
//   bound = constant + sum over factors of the factor's own minimum
//         + sum over remaining edges of min [ scale * f + alpha + alpha - sum of its thetas ]
//         + sum over remaining nodes of min over orders [ scale * n - sum of its alphas ]
// which no assignment can go below, whatever the numbers are. A checker recomputes every term from the problem.
//
//   entrain-certificate 1
//   scale 16
//   bound 1234                   claimed lower bound of the problem; or the line "infeasible"
//   value 1240                   optional, with offsets (and orders): an answer and what it costs
//   offsets 0 17 ...
//   orders 0 1 ...
//   merge 3 9                    edges 3 and 9 join the same two nodes: a new edge holds their sum
//   end 7                        node 7 has one edge: its best reply goes to the node costs of its neighbour
//   chain 8                      node 8 has two edges to two nodes: a new edge holds the best of both
//   same 5                       edge 5 admits one difference only: its second node joins its first
//   alpha 12 from 0 4            integers by order, at the first (from) or second (to) node of edge 12
//   cycle 3+ 10+ 4-              a simple cycle of remaining edges and the directions they are walked in, followed by a line
//   theta 0 3 -1 ...             for each of its edges, a table as long as the edge's
//
// New edges are numbered on, after the problem's edges and those of its fixed labels. A merged edge runs as its first part does; a chained
// edge runs from the far node of the middle node's older edge (the smaller number) to that of the younger.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "base/result.hpp"

namespace entrain::plan {

inline constexpr std::int64_t largest_certificate_entry = std::int64_t{1} << 61;
inline constexpr std::int64_t largest_certificate_scale = std::int64_t{1} << 40;

enum class StepKind { merge, end, chain, same };

struct CertificateStep {
  StepKind kind = StepKind::end;
  int first = 0;   // merge, same: an edge; end, chain: a node
  int second = 0;  // merge: the other edge
  bool operator==(const CertificateStep&) const = default;
};

struct CertificateAlpha {
  int edge = 0;
  bool at_from = true;
  std::vector<std::int64_t> values;  // by order of that node
  bool operator==(const CertificateAlpha&) const = default;
};

struct WalkedEdge {
  int edge = 0;
  bool forward = true;
  bool operator==(const WalkedEdge&) const = default;
};

struct CertificateCycle {
  std::vector<WalkedEdge> walk;
  std::vector<std::vector<std::int64_t>> thetas;  // by position of the walk, in the edge's own direction
  bool operator==(const CertificateCycle&) const = default;
};

struct Certificate {
  std::int64_t scale = 1;
  bool infeasible = false;              // claims that no assignment is admissible
  std::int64_t bound = 0;               // otherwise: claims that none costs less
  std::optional<std::int64_t> value;    // an answer, and what it costs
  std::vector<int> offsets, orders;     // by node; empty orders: the first everywhere
  std::vector<CertificateStep> steps;
  std::vector<CertificateAlpha> alphas;
  std::vector<CertificateCycle> cycles;
  bool operator==(const Certificate&) const = default;
};

// Reads a certificate; `source` names the file in messages. Errors: everything that is wrong with the text. Whether the numbers prove
// anything is the review's to say.
[[nodiscard]] Result<Certificate> read_certificate(std::string_view text, const std::string& source);

// Deterministic text; read_certificate(write_certificate(c)) equals c.
std::string write_certificate(const Certificate& certificate);

}  // namespace entrain::plan
