"""Produces deterministic parcel events to a topic at a steady rate; not ours: librdkafka through python3-confluent-kafka.

usage: paced-producer.py BOOTSTRAP TOPIC PARTITIONS EVENTS RATE BASE_MS STEP_MS
Event i goes to partition i % PARTITIONS, its event time is BASE_MS + i * STEP_MS, its values follow from i alone, so that
whoever reads the topic can work out what must be there. The producer is idempotent: a broker that goes away and comes back
gets each event once. Prints one line of JSON at the end; exits with 1 when an event could not be delivered.
"""

import json
import sys
import time

from confluent_kafka import Producer

DEPOTS = ("north", "south", "east")


def event(i, base_ms, step_ms):
    return json.dumps(
        {
            "at": base_ms + i * step_ms,
            "depot": DEPOTS[i % 3],
            "cargo": {"temp": ((i * 7919) % 1000) / 100.0},
            "doors": i % 5 if i % 10 else None,
        },
        separators=(",", ":"),
    )


def main():
    bootstrap, topic = sys.argv[1:3]
    partitions, events, rate, base_ms, step_ms = (int(a) for a in sys.argv[3:8])
    producer = Producer(
        {
            "bootstrap.servers": bootstrap,
            "enable.idempotence": True,
            "linger.ms": 20,
            "message.timeout.ms": 0,
            "reconnect.backoff.max.ms": 1000,
        }
    )
    failed = []
    delivered = [0]

    def on_delivery(error, message):
        if error is not None:
            failed.append(str(error))
        else:
            delivered[0] += 1

    started = time.monotonic()
    for i in range(events):
        while True:
            try:
                producer.produce(topic, event(i, base_ms, step_ms), partition=i % partitions, on_delivery=on_delivery)
                break
            except BufferError:
                producer.poll(0.1)
        if i % 500 == 499:
            producer.poll(0)
            ahead = started + (i + 1) / rate - time.monotonic()
            if ahead > 0:
                time.sleep(ahead)
    producer.flush(300)
    print(json.dumps({"delivered": delivered[0], "failed": len(failed), "seconds": round(time.monotonic() - started, 1)}))
    sys.exit(0 if delivered[0] == events and not failed else 1)


main()
