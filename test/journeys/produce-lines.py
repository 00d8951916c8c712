"""Produces what stands on standard input to a topic; not ours: librdkafka through python3-confluent-kafka.

usage: produce-lines.py BOOTSTRAP TOPIC CODEC
Each line of input is `PARTITION BASE64` or `PARTITION null`. CODEC is none, gzip, snappy, lz4 or zstd.
Exits with 1 when a record could not be delivered.
"""

import base64
import sys

from confluent_kafka import Producer


def main():
    bootstrap, topic, codec = sys.argv[1:4]
    producer = Producer(
        {
            "bootstrap.servers": bootstrap,
            "compression.type": codec,
            "enable.idempotence": True,
            "linger.ms": 20,
            "message.max.bytes": 3_000_000,
        }
    )
    failed = []

    def on_delivery(error, _message):
        if error is not None:
            failed.append(str(error))

    for line in sys.stdin:
        partition, data = line.split()
        value = None if data == "null" else base64.b64decode("" if data == "-" else data)
        while True:
            try:
                producer.produce(topic, value, partition=int(partition), on_delivery=on_delivery)
                break
            except BufferError:
                producer.poll(0.1)
        producer.poll(0)
    left = producer.flush(60)
    if failed or left:
        sys.exit(f"{left} records were not delivered; {failed[:3]}")


main()
