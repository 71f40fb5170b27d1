#!/usr/bin/env bash
# Dumps the database on a schedule and keeps the dumps for some days.
#
#   backup.sh         runs until it is stopped
#   backup.sh once    makes one dump
#   backup.sh check   says whether the newest dump is young enough (the container's health)
set -euo pipefail

every_minutes="${BACKUP_EVERY_MINUTES:-60}"
keep_days="${BACKUP_KEEP_DAYS:-14}"
folder="${BACKUP_FOLDER:?}"

say() { echo "$(date -u +%FT%TZ) $*"; }

newest() { find "$folder" -name 'thawline-*.sql.gz' -printf '%T@ %p\n' | sort -n | tail -n 1 | cut -d' ' -f2-; }

# A dump is written beside its name and renamed when complete, so that a file with the right name is whole.
dump() {
  local name draft
  name="$folder/thawline-$(date -u +%Y%m%dT%H%M%SZ).sql.gz"
  draft="$name.part"
  # The password goes by the environment: a command line can be read by every process.
  if ! MYSQL_PWD="$BACKUP_PASSWORD" mariadb-dump \
    --host="$BACKUP_HOST" --port="$BACKUP_PORT" --user="$BACKUP_USER" \
    --single-transaction --quick --hex-blob --no-tablespaces --skip-lock-tables \
    "$BACKUP_DATABASE" | gzip >"$draft"; then
    rm -f "$draft"
    say "the backup failed"
    return 1
  fi
  # mariadb-dump ends a complete dump with this line.
  if ! gzip -dc "$draft" | tail -n 1 | grep -q '^-- Dump completed'; then
    rm -f "$draft"
    say "the backup is not complete"
    return 1
  fi
  sync "$draft"
  mv "$draft" "$name"
  say "backup $(basename "$name"), $(stat -c %s "$name") bytes"
}

# The newest dump stays, however old it is.
prune() {
  local keep
  keep="$(newest)"
  find "$folder" -name 'thawline-*.sql.gz' -mtime "+$keep_days" ! -path "$keep" -print -delete
  find "$folder" -name 'thawline-*.sql.gz.part' -mmin +120 -delete
}

check() {
  local last age_minutes
  last="$(newest)"
  [[ -n "$last" ]] || { echo "no backup yet"; return 1; }
  age_minutes=$((($(date +%s) - $(stat -c %Y "$last")) / 60))
  echo "the newest backup is $age_minutes minutes old"
  ((age_minutes <= 2 * every_minutes + 5))
}

case "${1:-run}" in
  once) dump && prune ;;
  check) check ;;
  run)
    trap 'exit 0' TERM INT
    while true; do
      # A failed backup is said and tried again next time; the health check turns red meanwhile.
      if dump; then prune; fi
      sleep "$((every_minutes * 60))" &
      wait $!
    done
    ;;
  *)
    echo "backup.sh [once|check]" >&2
    exit 2
    ;;
esac
