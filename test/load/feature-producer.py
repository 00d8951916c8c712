"""Produces events of many numeric features as fast as it can; not ours: librdkafka through python3-confluent-kafka.

usage: feature-producer.py BOOTSTRAP TOPIC PARTITIONS EVENTS FEATURES CODEC SEED RATE
Event times are as of a stream of RATE events a second. Values are log-normal with six decimals; a third of the features lie one object deeper. Exits with 1 when an event was not delivered.
"""

import json
import random
import sys

from confluent_kafka import Producer


def main():
    bootstrap, topic = sys.argv[1:3]
    partitions, events, features = (int(a) for a in sys.argv[3:6])
    codec, seed, rate = sys.argv[6], int(sys.argv[7]), int(sys.argv[8])
    draw = random.Random(seed)
    pool = [round(draw.lognormvariate(0, 1), 6) for _ in range(100_003)]
    producer = Producer(
        {
            "bootstrap.servers": bootstrap,
            "compression.type": codec,
            "linger.ms": 50,
            "batch.num.messages": 5000,
            "queue.buffering.max.messages": 500_000,
        }
    )
    failed = []

    def on_delivery(error, _message):
        if error is not None:
            failed.append(str(error))

    base_ms = 1_764_579_600_000
    for i in range(events):
        value = {"at": base_ms + i * 1000 // rate, "depot": f"d{i % 4}", "cargo": {}}
        for f in range(features):
            (value["cargo"] if f % 3 == 0 else value)[f"f{f}"] = pool[(i * features + f) % len(pool)]
        data = json.dumps(value, separators=(",", ":"))
        while True:
            try:
                producer.produce(topic, data, partition=i % partitions, on_delivery=on_delivery)
                break
            except BufferError:
                producer.poll(0.1)
        if i % 1000 == 999:
            producer.poll(0)
    left = producer.flush(120)
    if failed or left:
        sys.exit(f"{left} events were not delivered; {failed[:3]}")


main()
