"""Produces wide feature events at a steady rate for a given time; the record's own timestamp is the event time.

usage: wide-producer.py BOOTSTRAP TOPIC FEATURES SLICES RATE SECONDS
A pool of 4,000 events is made once (seeded) and sent round and round, so that the producer leaves the machine to what is measured.
Prints one line of JSON at the end.
"""

import json
import random
import sys
import time

from confluent_kafka import Producer

POOL = 4_000


def main():
    bootstrap, topic = sys.argv[1:3]
    features, slices, rate, seconds = (int(a) for a in sys.argv[3:7])
    draw = random.Random(60_606)
    pool = []
    for i in range(POOL):
        row = {"s": "s%d" % (i % slices)}
        for f in range(features):
            row["f%d" % f] = round(draw.gauss(50, 10), 2)
        pool.append(json.dumps(row, separators=(",", ":")))
    producer = Producer({"bootstrap.servers": bootstrap, "linger.ms": 50, "compression.type": "lz4", "batch.size": 1_000_000})
    started = time.monotonic()
    sent = 0
    while time.monotonic() - started < seconds:
        for _ in range(max(1, rate // 20)):
            while True:
                try:
                    producer.produce(topic, pool[sent % POOL], timestamp=int(time.time() * 1000))
                    break
                except BufferError:
                    producer.poll(0.05)
            sent += 1
        producer.poll(0)
        ahead = started + sent / rate - time.monotonic()
        if ahead > 0:
            time.sleep(ahead)
    producer.flush(120)
    print(json.dumps({"sent": sent, "bytesPerEvent": sum(len(p) for p in pool) // POOL, "seconds": round(time.monotonic() - started, 1)}))


main()
