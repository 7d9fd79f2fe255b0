using System.Collections.Immutable;

namespace StreamLogit.Worker.Web.Views;

/// <summary>Short names for the settings of a bank.</summary>
internal static class SettingNames
{
    /// <summary>Leaves out of each name the numbers that all settings of its update rule share: <c>sgd step=0.1 stepDecay=0</c> becomes <c>sgd step=0.1</c>.</summary>
    public static ImmutableArray<string> Shorten(IReadOnlyList<string> names)
    {
        var parts = names.Select(name => name.Split(' ')).ToList();
        var shared = parts.GroupBy(part => part[0]).ToDictionary(
            rule => rule.Key, rule => rule.Count() == 1 ? [] : rule.Skip(1).Aggregate(rule.First().ToHashSet(), (common, part) =>
            {
                common.IntersectWith(part);
                return common;
            }));
        return [.. parts.Select(part => string.Join(' ', part.Where((word, index) => index == 0 || !shared[part[0]].Contains(word))))];
    }
}
