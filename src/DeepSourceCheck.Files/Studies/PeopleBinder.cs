using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Studies;

/// <summary>What `protocol` says of a study of several people: their spread, their number, the test over them, drop-out.</summary>
internal static class PeopleBinder
{
    private const string Spread = "spread_between_people", Participants = "participants", DropOut = "dropout_fraction", Test = "people_test";

    /// <summary>Binds; null where one person is planned for.</summary>
    /// <param name="protocol">The study's protocol.</param>
    public static PeopleChoice? Bind(Section protocol)
    {
        if (!protocol.States(Spread) && !protocol.States(Participants))
        {
            foreach (string name in new[] { DropOut, Test }.Where(protocol.States))
            {
                protocol.Problem(name, $"is of a study of several people and needs {Spread} beside it, the coefficient of variation of the moment between them; state that, or remove it");
                protocol.Skip(name);
            }

            return null;
        }

        double? spread = protocol.Number(Spread), participants = protocol.Number(Participants), lost = protocol.Number(DropOut);
        Section test = protocol.Map(Test) ?? protocol.Entry(Test);
        double? alpha = test.Number("alpha"), power = test.Number("power"), difference = test.Number("groups_differ_by");
        if (power <= alpha)
        {
            test.Problem("power", FormattableString.Invariant($"the probability {power:0.######} of finding the effect is not above the false-alarm rate alpha {alpha:0.######}, which chance alone reaches; 0.8 or 0.9 are usual"));
        }

        if (!protocol.States(Spread))
        {
            protocol.Warn(Participants, $"people are taken as alike, which no group is: their power is an upper bound; state protocol.{Spread}");
        }

        return spread is null || lost is null || alpha is null || power is null ? null : new()
        {
            Spread = spread.Value,
            Participants = (int?)participants,
            DropOut = lost.Value,
            Alpha = alpha.Value,
            Power = power.Value,
            GroupDifference = difference,
        };
    }
}
