# Outlives those who started it. Each line it reads says who has to end once the pipe is closed, because its
# other end ended or was killed: process groups, a bar, single processes to be interrupted after those.
first=
last=
while IFS='|' read -r first_now last_now; do
  first=$first_now
  last=$last_now
done
for pid in $first; do kill -s TERM -- "-$pid"; done
tries=0
for pid in $first; do
  while kill -s 0 -- "-$pid" && [ "$tries" -lt 100 ]; do
    sleep 0.1
    tries=$((tries + 1))
  done
  kill -s KILL -- "-$pid"
done
for pid in $last; do kill -s INT "$pid"; done
