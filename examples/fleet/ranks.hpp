// Which part of the work this process has under MPI.
#pragma once

#include <optional>

#include <wend/lab/row_file.hpp>

namespace ranks {

/// Joins the other processes that mpirun started, for as long as it lives.
class Ranks {
 public:
  Ranks(int& argc, char**& argv);
  ~Ranks();
  Ranks(Ranks const&) = delete;
  Ranks& operator=(Ranks const&) = delete;

  /// This process's shard; nothing in a program that was built without MPI.
  [[nodiscard]] std::optional<wend::lab::Shard> shard() const;
};

}  // namespace ranks
