// wend/lab/shards.hpp - a campaign in parts, on any machines, put together again: what is missing is named.
#pragma once

#include <algorithm>
#include <bit>
#include <cstddef>
#include <cstdint>
#include <optional>
#include <string>
#include <typeinfo>
#include <utility>
#include <vector>

#include "wend/lab/campaign.hpp"
#include "wend/lab/csv.hpp"
#include "wend/lab/row_file.hpp"
#include "wend/watch/packed.hpp"

namespace wend::inline v0::lab {

/// A checksum over what a campaign's rows come from: the type and parameters of the loop, the vehicle, the worlds, the
/// options that count, and, since a function cannot be read, where three of the runs start and go and what becomes of
/// the first: with another policy, another build of it or another library it is a different one.
template <int Told = discs_told, typename Loop>
[[nodiscard]] std::uint32_t campaign_fingerprint(Loop const& loop, Vehicle const& vehicle, Scenes const& scenes,
                                                 std::uint64_t runs, std::uint64_t seed,
                                                 CampaignOptions const& options = {}) {
  std::string text = typeid(Loop).name();
  auto const add = [&text](auto... values) { ((text += ',', detail::append(text, values)), ...); };
  Vehicle const& v = vehicle;
  add(parameters_checksum(loop), parameters_checksum(v.drive), Told, options.finest);
  add(v.radius, v.acceleration, v.latency, v.watchdog, v.period, v.jitter, v.range_noise, v.sight, v.dropout);
  add(v.position_noise, v.heading_noise, v.disc_noise, v.radius_noise, v.disc_dropout, v.slip, v.wheel_spread);
  add(v.track_spread);
  for (World const& world : scenes.worlds) {
    add(world.discs.size());
    for (WorldDisc const& d : world.discs) {
      add(d.disc.centre.x(), d.disc.centre.y(), d.disc.radius, d.velocity.x(), d.velocity.y());
    }
  }
  if (runs > 0) {
    detail::GroundList const grounds(scenes, Told);
    for (std::uint64_t const run : {std::uint64_t{0}, runs / 2, runs - 1}) {
      detail::SceneOf const scene = grounds.scene(seed, run);
      Trip const& trip = scene.trip;
      add(scene.number, scene.ground->world().discs.size(), trip.start.position.x(), trip.start.position.y());
      add(trip.start.heading.x(), trip.start.heading.y(), trip.goal.x(), trip.goal.y(), trip.time_limit);
    }
    RunRow const row = replay_run<Told>(loop, vehicle, scenes, 0, seed, options).row;
    add(static_cast<int>(row.ending), row.time, row.path_length, row.least_clearance, row.switches);
  }
  return detail::checksum(text);
}

/// What became of a merge.
struct Merged {
  RowFile whole;  ///< all rows that could be had, by run number; complete when every shard was whole
  std::vector<std::string> problems{};  ///< one sentence for each file or shard that is not as it should be
  std::vector<Shard> run_again{};       ///< the shards without a whole file

  /// Whether no row is missing.
  [[nodiscard]] bool complete() const noexcept { return whole.complete; }
};

namespace detail {

struct ReadFile {
  std::string name;
  RowFile file;
};

[[nodiscard]] inline std::string name_of(Shard const& shard) {
  return "shard " + std::to_string(shard.number) + "/" + std::to_string(shard.of);
}

// Reads one file; what is wrong with it goes to the problems.
[[nodiscard]] inline std::optional<ReadFile> read_row_file(std::string const& name,
                                                           std::vector<std::string>& problems) {
  RowFile header;
  header.shard.of = 0;
  try {
    return ReadFile{name, parse_rows(name, read_whole(name), &header)};
  } catch (FileError const& error) {
    problems.push_back(std::string("damaged: ") + error.what() +
                       (header.shard.of > 0 ? " (" + name_of(header.shard) + ")" : ""));
    return std::nullopt;
  }
}

}  // namespace detail

/// Puts the files of a campaign's shards together, in any order. Rows have the bits that one process would have given.
/// Files that are damaged, of another campaign or of another partition, or there twice, are named and not taken; so are
/// shards that were stopped early or are missing, and those are to be run again. With `expected` the campaign is that
/// one, else that of the first file that is whole.
[[nodiscard]] inline Merged merge(std::vector<std::string> const& names,
                                  std::optional<CampaignIdentity> const& expected = std::nullopt) {
  Merged merged;
  std::vector<detail::ReadFile> files;
  for (std::string const& name : names) {
    if (auto read = detail::read_row_file(name, merged.problems)) {
      files.push_back(std::move(*read));
    }
  }
  // The reference: what is asked for, or whatever comes first.
  auto const is_own = [&](detail::ReadFile const& f) { return !expected || f.file.identity == *expected; };
  auto const model = std::find_if(files.begin(), files.end(), is_own);
  if (model == files.end()) {
    for (detail::ReadFile const& f : files) {
      merged.problems.push_back("foreign: " + f.name + " is of another campaign");
    }
    merged.problems.push_back("missing: no file of this campaign is whole");
    merged.whole.complete = false;
    return merged;
  }
  merged.whole.identity = model->file.identity;
  std::uint64_t const count = model->file.shard.of;
  constexpr std::uint64_t most_shards = 1000000;
  if (count > most_shards) {
    throw FileError(model->name, "expected no more shards than " + std::to_string(most_shards));
  }
  std::vector<detail::ReadFile const*> shards(count, nullptr);
  std::vector<bool> in_doubt(count, false);  // two whole files that differ: one of them must be wrong
  for (detail::ReadFile const& f : files) {
    if (!(f.file.identity == merged.whole.identity)) {
      merged.problems.push_back("foreign: " + f.name + " is of another campaign");
    } else if (f.file.shard.of != count) {
      merged.problems.push_back("foreign: " + f.name + " is " + detail::name_of(f.file.shard) +
                                ", where others are of " + std::to_string(count));
    } else {
      detail::ReadFile const*& place = shards[f.file.shard.number - 1];
      if (place == nullptr) {
        place = &f;
      } else {
        merged.problems.push_back("double: " + detail::name_of(f.file.shard) + " is both " + place->name + " and " +
                                  f.name + (place->file.rows == f.file.rows ? ", which agree" : ", which differ"));
        in_doubt[f.file.shard.number - 1] = place->file.complete && f.file.complete &&
                                            !(place->file.rows == f.file.rows);
        place = !place->file.complete && f.file.complete ? &f : place;
      }
    }
  }
  merged.whole.complete = true;
  for (std::uint64_t i = 0; i < count; ++i) {
    Shard const shard{i + 1, count};
    if (shards[i] == nullptr || !shards[i]->file.complete || in_doubt[i]) {
      merged.whole.complete = false;
      merged.run_again.push_back(shard);
    }
    if (shards[i] == nullptr || !shards[i]->file.complete) {
      merged.problems.push_back(shards[i] == nullptr
                                    ? "missing: " + detail::name_of(shard)
                                    : "stopped: " + detail::name_of(shard) + " in " + shards[i]->name + " has " +
                                          std::to_string(shards[i]->file.rows.size()) + " of " +
                                          std::to_string(shard.size(merged.whole.identity.runs)) + " runs");
    }
    if (shards[i] != nullptr) {
      auto const& rows = shards[i]->file.rows;
      merged.whole.rows.insert(merged.whole.rows.end(), rows.begin(), rows.end());
    }
  }
  return merged;
}

}  // namespace wend::inline v0::lab
