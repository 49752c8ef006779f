# The week M_t/M/c of the waiting simulation in SimPy (https://simpy.readthedocs.io), written as its own examples are:
# a process for each patient and a Resource for the bed spaces. Debian: python3-simpy3.
# Records what ours records: present and waiting at the end of every hour, and by hour of arrival patients, time waited
# and waits over the limit.
# Reads the plan as JSON from standard input, writes what came out as JSON.
import json
import random
import sys
import time

import simpy


def patient(env, beds, numbers, hazard, limit, counts, waits):
    arrived = env.now
    counts[0] += 1
    with beds.request() as request:
        yield request
        counts[0] -= 1
        waited = env.now - arrived
        row = waits[int(arrived)]
        row[0] += 1
        row[1] += waited
        if waited > limit:
            row[2] += 1
        yield env.timeout(numbers.expovariate(hazard))
    counts[1] -= 1


def arrivals(env, beds, numbers, plan, counts, waits):
    hazard, limit = plan["hazardPerHour"], plan["waitLimitHours"]
    for _ in range(plan["inBedSpaces"] + plan["waiting"]):
        counts[1] += 1
        counts[2] += 1
        env.process(patient(env, beds, numbers, hazard, limit, counts, waits))
    for start, end, rate in zip(plan["segmentAt"], plan["segmentAt"][1:], plan["ratePerHour"]):
        at = start
        while True:
            # Exponential gaps have no memory: each segment begins a new one.
            at += numbers.expovariate(rate)
            if at >= end:
                break
            yield env.timeout(at - env.now)
            counts[1] += 1
            counts[2] += 1
            env.process(patient(env, beds, numbers, hazard, limit, counts, waits))
        yield env.timeout(end - env.now)


def watch(env, ends, counts, sums):
    for index, end in enumerate(ends):
        yield env.timeout(end - env.now)
        waiting, present = counts[0], counts[1]
        row = sums[index]
        row[0] += present
        row[1] += present * present
        row[2] += waiting
        row[3] += waiting * waiting


def main():
    plan = json.load(sys.stdin)
    numbers = random.Random(plan["seed"])
    ends = plan["segmentAt"][1:]
    sums = [[0, 0, 0, 0] for _ in ends]
    waits = [[0, 0.0, 0] for _ in ends]
    patients = 0
    started = time.process_time()
    for _ in range(plan["replications"]):
        env = simpy.Environment()
        beds = simpy.Resource(env, capacity=plan["beds"])
        # Waiting, present, patients so far.
        counts = [0, 0, 0]
        env.process(arrivals(env, beds, numbers, plan, counts, waits))
        env.process(watch(env, ends, counts, sums))
        env.run(until=ends[-1] + 1e-9)
        patients += counts[2]
    seconds = time.process_time() - started
    json.dump({"version": simpy.__version__, "seconds": seconds, "patients": patients, "sums": sums, "waits": waits}, sys.stdout)


main()
