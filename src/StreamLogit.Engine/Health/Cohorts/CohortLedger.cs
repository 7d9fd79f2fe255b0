using System.Collections.Immutable;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Numerics;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Health.Cohorts;

/// <summary>Counts labels at the time at which their events were scored.</summary>
/// <param name="history">How many hours and days are kept.</param>
internal sealed class CohortLedger(HealthHistoryOptions history)
{
    private const long MicrosecondsOfHour = 3_600_000_000;
    private const long HoursOfDay = 24;

    // The ages that are told apart, in hours.
    private static readonly ImmutableArray<long> AgeEdges = [0, 1, 3, 6, 12, 24, 48, 72, 168, 336, 720, 1440, 2160, 4320, 8760, long.MaxValue / MicrosecondsOfHour];

    private readonly CohortRing _hours = new("health/cohorts/hours", history.Hours);
    private readonly CohortRing _days = new("health/cohorts/days", history.Days);

    /// <summary>Moves to an hour, counted from 1970, that is not before the present one.</summary>
    public void MoveTo(long hour)
    {
        if (hour != _hours.Open) _hours.MoveTo(hour);
        if (DayOf(hour) != _days.Open) _days.MoveTo(DayOf(hour));
    }

    /// <summary>Counts events that were scored in the present hour.</summary>
    public void CountEvents(double events)
    {
        if (_hours.TryUse(_hours.Open, out int hour)) _hours.At(hour).Events += events;
        if (_days.TryUse(_days.Open, out int day)) _days.At(day).Events += events;
    }

    /// <summary>Counts labels.</summary>
    public void CountLabels(LabelRun run)
    {
        for (int i = 0; i < run.Count; i++)
        {
            long hour = HourOf(run.ScoredAt[i]);
            if (_hours.TryUse(hour, out int place)) run.AddTo(i, ref _hours.At(place));
            if (_days.TryUse(DayOf(hour), out place)) run.AddTo(i, ref _days.At(place));
        }
    }

    /// <summary>Adds what a corrected label changes, or an assumed one that turned out to be true.</summary>
    public void Change(long scoredAtMicroseconds, in CohortSums change)
    {
        long hour = HourOf(scoredAtMicroseconds);
        if (_hours.TryUse(hour, out int place)) Add(ref _hours.At(place), change);
        if (_days.TryUse(DayOf(hour), out place)) Add(ref _days.At(place), change);
    }

    /// <summary>The figures of now.</summary>
    /// <param name="clockMicroseconds">The stream's clock.</param>
    /// <param name="openEvents">Events of the present hour that are not counted yet.</param>
    public CohortFigures Figures(long clockMicroseconds, double openEvents)
    {
        var hours = Read(_hours, MicrosecondsOfHour, openEvents);
        var days = Read(_days, HoursOfDay * MicrosecondsOfHour, openEvents);
        return new CohortFigures(hours, days, ByAge(hours, days, clockMicroseconds));
    }

    public void Save(StateBlocks changes)
    {
        _hours.Save(changes);
        _days.Save(changes);
    }

    public void Load(StateBlocks state)
    {
        _hours.Load(state);
        _days.Load(state);
    }

    private static ImmutableArray<EventCohort> Read(CohortRing ring, long length, double openEvents)
    {
        var cohorts = ImmutableArray.CreateBuilder<EventCohort>();
        for (long number = ring.First; number <= ring.Open; number++)
        {
            var sums = ring[number];
            if (number == ring.Open) sums.Events += openEvents;
            if (sums.Events == 0 && sums.Labelled == 0) continue;
            cohorts.Add(new EventCohort(
                number * length, length, (long)sums.Events, sums.Labelled, sums.Weight, sums.LogLoss / sums.Weight, sums.BaseRateLogLoss / sums.Weight,
                sums.Probability / sums.Weight, sums.Positive / sums.Weight));
        }
        return cohorts.DrainToImmutable();
    }

    private static ImmutableArray<LabelledAtAge> ByAge(ImmutableArray<EventCohort> hours, ImmutableArray<EventCohort> days, long clock)
    {
        var events = new long[AgeEdges.Length - 1];
        var labelled = new double[AgeEdges.Length - 1];
        foreach (var cohort in hours) Count(cohort);
        // Whole days before the first hour that is kept.
        long firstHour = hours.IsEmpty ? long.MaxValue : hours[0].FromMicroseconds;
        foreach (var cohort in days)
            if (cohort.FromMicroseconds + cohort.LengthMicroseconds <= firstHour) Count(cohort);

        var ages = ImmutableArray.CreateBuilder<LabelledAtAge>();
        for (int i = 0; i < events.Length; i++)
            if (events[i] > 0) ages.Add(new LabelledAtAge(AgeEdges[i] * MicrosecondsOfHour, AgeEdges[i + 1] * MicrosecondsOfHour, events[i], labelled[i]));
        return ages.DrainToImmutable();

        void Count(in EventCohort cohort)
        {
            long age = Math.Max(clock - (cohort.FromMicroseconds + cohort.LengthMicroseconds / 2), 0) / MicrosecondsOfHour;
            int band = 0;
            while (age >= AgeEdges[band + 1]) band++;
            events[band] += cohort.Events;
            labelled[band] += cohort.Labelled;
        }
    }

    private static void Add(ref CohortSums sums, in CohortSums change)
    {
        sums.Labelled += change.Labelled;
        sums.Weight += change.Weight;
        sums.LogLoss += change.LogLoss;
        sums.BaseRateLogLoss += change.BaseRateLogLoss;
        sums.Probability += change.Probability;
        sums.Positive += change.Positive;
    }

    private static long DayOf(long hour) => WholeDivision.Floor(hour, HoursOfDay);

    private static long HourOf(long microseconds) => WholeDivision.Floor(microseconds, MicrosecondsOfHour);
}
