// In a file of its own: MPI's header knows C's casts only.
#include "ranks.hpp"

#ifdef FLEET_HAS_MPI

#if defined(__GNUC__)
#pragma GCC diagnostic ignored "-Wold-style-cast"
#endif
#include <mpi.h>

namespace ranks {

Ranks::Ranks(int& argc, char**& argv) { MPI_Init(&argc, &argv); }

Ranks::~Ranks() { MPI_Finalize(); }

std::optional<wend::lab::Shard> Ranks::shard() const {
  int rank = 0;
  int size = 1;
  MPI_Comm_rank(MPI_COMM_WORLD, &rank);
  MPI_Comm_size(MPI_COMM_WORLD, &size);
  return wend::lab::Shard{static_cast<std::uint64_t>(rank) + 1, static_cast<std::uint64_t>(size)};
}

}  // namespace ranks

#else

namespace ranks {

Ranks::Ranks(int&, char**&) {}
Ranks::~Ranks() = default;
std::optional<wend::lab::Shard> Ranks::shard() const { return std::nullopt; }

}  // namespace ranks

#endif
